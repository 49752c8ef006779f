import { once } from 'node:events';
import { existsSync, readdirSync, rmSync } from 'node:fs';
import { createServer, request as httpRequest, type RequestOptions } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { VisitLogCheck, VisitLogDetail, VisitLogSummary } from '../../shared/api/visit-logs.ts';
import { canonicalHeader } from '../../shared/domain/canonical-visit.ts';
import { readSiteVisits } from '../../server/database/read-visits.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Visit } from '../../server/entities/Visit.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { visitLogJobs } from '../../server/features/visit-logs/routes.ts';
import { sweepVisitLogs } from '../../server/features/visit-logs/sweep-visit-logs.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitCsv, visitLine } from '../support/build-visit-csv.ts';
import { plantedHeaders, plantedValues } from '../support/planted-identifiers.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
/** 2026-09-21T14:13:20Z, a Monday. */
const now = 1_790_000_000;
const midnight = now - (now % day);

let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;
let logsPath: string;
let jobsStarted = false;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(async () => {
  await server.deps.jobs.stop();
  await server.close();
});
beforeEach(async () => {
  rmSync(join(server.deps.config.dataDir, 'tmp'), { recursive: true, force: true });
  server.time.now = now;
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }], 'Sam Steward');
  steward = await server.signedInAs(person.id);
  logsPath = `/api/sites/${built.site.id}/visit-logs`;
});

/** Works the queue until nothing waits. */
async function workJobs() {
  if (!jobsStarted) await server.deps.jobs.start(visitLogJobs(server.deps, () => Promise.resolve()));
  jobsStarted = true;
  await server.deps.jobs.idle();
}

function upload(body: string | Buffer, { type = 'text/csv', fileName = 'march.csv' } = {}) {
  return steward
    .send('post', `${logsPath}/checks?fileName=${encodeURIComponent(fileName)}`)
    .set('content-type', type)
    .send(body);
}

const facts = { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' };

async function load(csv: string): Promise<string> {
  const checked = await upload(csv);
  expect(checked.status, checked.text).toBe(201);
  const accepted = await steward.send('post', logsPath, {
    checkId: (checked.body as VisitLogCheck).checkId,
    goodRowsOnly: false,
    facts,
  });
  expect(accepted.status, accepted.text).toBe(202);
  await workJobs();
  return (accepted.body as { logId: string }).logId;
}

/** Nothing of a refused file is anywhere. */
async function expectNothingKept() {
  const folder = join(server.deps.config.dataDir, 'tmp');
  expect(existsSync(folder) ? readdirSync(folder) : []).toEqual([]);
  expect(await server.deps.database.read.countBy(VisitLog, { siteId: built.site.id })).toBe(0);
}

const visitsOf = (logNumber: number) => server.deps.database.read.countBy(Visit, { logNumber });
const findLog = (id: string) => server.deps.database.read.findOneByOrFail(VisitLog, { id });

describe('a clean log', () => {
  test('is checked, accepted, loaded, and its visits can be read in columns', async () => {
    const from = midnight - 10 * day + 8 * 3600;
    const csv = buildVisitCsv({ from, rows: 9000, everySeconds: 60 });
    const checked = await upload(csv);
    expect(checked.status).toBe(201);
    const report = checked.body as VisitLogCheck;
    expect(report).toMatchObject({
      fileName: 'march.csv',
      bytes: csv.length,
      rows: 9000,
      goodRows: 9000,
      problemRows: 0,
      problems: [],
      identicalRows: 0,
      visitsByArea: [
        { areaId: built.areas[0].id, name: 'Acute', visits: 4500 },
        { areaId: built.areas[1].id, name: 'Resuscitation', visits: 4500 },
      ],
      recorded: { departure: 9000, bedSpace: 9000, admissionDecision: 2250, disposition: 9000, byAmbulance: 9000 },
    });
    // Whole days of London, which is an hour ahead of UTC in September.
    expect(report.period).toEqual({ from: midnight - 10 * day - 3600, to: midnight - 3 * day - 3600 });

    const accepted = await steward.send('post', logsPath, { checkId: report.checkId, goodRowsOnly: false, facts });
    expect(accepted.status).toBe(202);
    const { logId } = accepted.body as { logId: string };
    expect((await findLog(logId)).status).toBe('loading');
    await workJobs();

    const detail = (await steward.get(`${logsPath}/${logId}`)).body as VisitLogDetail;
    expect(detail).toMatchObject({
      status: 'ready',
      rows: 9000,
      facts,
      leftOut: [],
      uploadedBy: 'Sam Steward',
      readyAt: now,
    });
    expect(detail.counts).toEqual([detail.period]);
    expect(readdirSync(join(server.deps.config.dataDir, 'tmp'))).toEqual([]);

    const { table, areaIds, lineage } = readSiteVisits(server.deps.database.file, built.site.id);
    expect(areaIds).toEqual(built.areas.map((area) => area.id));
    expect(table.length).toBe(9000);
    expect(lineage).toMatchObject([{ logId, rows: 9000, facts }]);
    expect([...table.arrivalAt.slice(0, 2)]).toEqual([from, from + 60]);
    expect([...table.departureAt.slice(0, 2)]).toEqual([from + 10_800, from + 10_860]);
    expect([...table.admissionDecisionAt.slice(0, 2)]).toEqual([from + 5400, NaN]);
    expect([...table.disposition.slice(0, 2)]).toEqual([1, 0]);
    expect([...table.byAmbulance.slice(0, 2)]).toEqual([1, 0]);
    expect([...table.area.slice(0, 2)]).toEqual([0, 1]);

    const events = await server.deps.database.read.findBy(AuditEvent, { siteId: built.site.id });
    expect(events.map((event) => [event.event, event.actor])).toEqual([
      ['visit-log.accepted', 'Sam Steward'],
      ['visit-log.uploaded', 'Sam Steward'],
    ]);
  });

  test('may be gzipped, have CRLF, a byte order mark, columns in another order, areas by id, quoted fields', async () => {
    const at = '2026-09-01T10:00:00+01:00';
    const csv = `\uFEFFcare_area,departure_at,arrival_at\r\n${built.areas[1].id},2026-09-01T10:30:00.500Z,${at}\r\n"Acute",,"${at}"\r\n`;
    const checked = await upload(gzipSync(csv), { type: 'application/gzip' });
    expect(checked.body).toMatchObject({
      rows: 2,
      goodRows: 2,
      bytes: Buffer.byteLength(csv),
      recorded: { departure: 1 },
    });
  });

  test('keeps a neutral name if its own could identify somebody', async () => {
    const checked = await upload(buildVisitCsv({ from: midnight - day, rows: 3 }), {
      fileName: 'Olivia Fairweather 1950-02-01.csv',
    });
    expect((checked.body as VisitLogCheck).fileName).toBe('visit-log.csv');
  });

  test('is listed without a single visit, and only to those who may', async () => {
    const logId = await load(buildVisitCsv({ from: midnight - 3 * day, rows: 20 }));
    const listed = (await steward.get(logsPath)).body as { logs: VisitLogSummary[] };
    expect(listed.logs.map((log) => log.id)).toEqual([logId]);

    expect((await server.nobody().get(logsPath)).status).toBe(401);
    const charge = await buildPerson(server.deps.database, [{ role: 'charge', siteId: built.site.id }]);
    const nurse = await server.signedInAs(charge.id);
    expect((await nurse.get(logsPath)).status).toBe(403);
    expect((await nurse.send('post', `${logsPath}/checks`).set('content-type', 'text/csv').send('x')).status).toBe(403);

    const elsewhere = await buildSite(server.deps.database);
    expect((await steward.get(`/api/sites/${elsewhere.site.id}/visit-logs`)).status).toBe(404);
    const other = await buildPerson(server.deps.database, [{ role: 'steward', siteId: elsewhere.site.id }]);
    const stranger = await server.signedInAs(other.id);
    expect((await stranger.get(`/api/sites/${elsewhere.site.id}/visit-logs/${logId}`)).status).toBe(404);
  });
});

describe('a newer log', () => {
  test('takes the place of older visits that arrived in its period, and gives it back when withdrawn', async () => {
    const older = await load(buildVisitCsv({ from: midnight - 10 * day, rows: 10 * 24, everySeconds: 3600 }));
    const newer = await load(buildVisitCsv({ from: midnight - 6 * day, rows: 2 * 48, everySeconds: 1800 }));
    const counted = () =>
      readSiteVisits(server.deps.database.file, built.site.id).lineage.map(({ logId, rows }) => [logId, rows]);
    const period = ((await steward.get(`${logsPath}/${newer}`)).body as VisitLogDetail).period;
    const taken = (period.to - period.from) / 3600;
    expect(counted()).toEqual([
      [newer, 96],
      [older, 240 - taken],
    ]);
    const detail = (await steward.get(`${logsPath}/${older}`)).body as VisitLogDetail;
    expect(detail.counts).toEqual([
      { from: detail.period.from, to: period.from },
      { from: period.to, to: detail.period.to },
    ]);

    const withdrawn = await steward.send('post', `${logsPath}/${newer}/withdrawal`, { reason: 'Wrong month exported' });
    expect(withdrawn.body).toMatchObject({
      status: 'withdrawn',
      withdrawnBy: 'Sam Steward',
      reason: 'Wrong month exported',
    });
    expect(counted()).toEqual([[older, 240]]);
    await workJobs();
    expect(await visitsOf((await findLog(newer)).number)).toBe(0);
    expect(await visitsOf((await findLog(older)).number)).toBe(240);

    const again = await steward.send('post', `${logsPath}/${newer}/withdrawal`, { reason: 'Once more' });
    expect(again.status).toBe(409);
  });

  test('a reason that could identify somebody is refused', async () => {
    const logId = await load(buildVisitCsv({ from: midnight - 3 * day, rows: 20 }));
    const refused = await steward.send('post', `${logsPath}/${logId}/withdrawal`, {
      reason: 'Mrs Fairweather asked us to',
    });
    expect(refused.status).toBe(400);
    expect(refused.text).not.toContain('Fairweather');
    expect((await findLog(logId)).status).toBe('ready');
  });
});

describe('problem rows', () => {
  const good = visitLine({ arrival: now - day, departure: now - day + 3600 });
  const csv = [
    canonicalHeader,
    good,
    visitLine({ arrival: now - day, departure: now - day - 60 }),
    visitLine({ arrival: now + day }),
    visitLine({ arrival: now - 40 * day, departure: now - 9 * day }),
    visitLine({ arrival: '21/09/2026 10:00' }),
    visitLine({ arrival: '2026-09-20T10:00:00' }),
    visitLine({ arrival: '' }),
    visitLine({ arrival: now - day, area: 'Maternity' }),
    visitLine({ arrival: now - day, area: '' }),
    visitLine({ arrival: now - day, disposition: 'went home' }),
    visitLine({ arrival: now - day, ambulance: 'maybe' }),
    visitLine({ arrival: now - day, bedSpace: now - 2 * day }),
    visitLine({ arrival: now - day, decision: now - 3600, departure: now - 7200 }),
    `${good},extra`,
    good.split(',').slice(0, 5).join(','),
  ].join('\n');

  test('are told by kind with row numbers, never with a value', async () => {
    const checked = await upload(csv);
    expect(checked.status).toBe(201);
    const report = checked.body as VisitLogCheck;
    expect(report).toMatchObject({ rows: 15, goodRows: 1, problemRows: 14 });
    expect(report.problems).toEqual([
      { problem: 'wrong number of fields', column: null, rows: 2, examples: [14, 15] },
      { problem: 'time missing', column: 'arrival_at', rows: 1, examples: [7] },
      { problem: 'time unreadable', column: 'arrival_at', rows: 2, examples: [5, 6] },
      { problem: 'time in the future', column: 'arrival_at', rows: 1, examples: [3] },
      { problem: 'area missing', column: 'care_area', rows: 1, examples: [9] },
      { problem: 'area unknown', column: 'care_area', rows: 1, examples: [8] },
      { problem: 'disposition unknown', column: 'disposition', rows: 1, examples: [10] },
      { problem: 'ambulance unknown', column: 'arrived_by_ambulance', rows: 1, examples: [11] },
      { problem: 'before arrival', column: 'departure_at', rows: 1, examples: [2] },
      { problem: 'before arrival', column: 'bed_space_at', rows: 1, examples: [12] },
      { problem: 'after departure', column: 'admission_decision_at', rows: 1, examples: [13] },
      { problem: 'stay over 30 days', column: 'departure_at', rows: 1, examples: [4] },
    ]);
    expect(checked.text).not.toContain('Maternity');
  });

  test('refuse the whole file unless the good rows alone are wanted; then their kinds and counts are kept', async () => {
    const { checkId } = (await upload(csv)).body as VisitLogCheck;
    const whole = await steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts });
    expect(whole.status).toBe(422);
    expect((whole.body as { faults: unknown[] }).faults).toHaveLength(12);
    expect(await server.deps.database.read.countBy(VisitLog, { siteId: built.site.id })).toBe(0);

    const some = await steward.send('post', logsPath, {
      checkId,
      goodRowsOnly: true,
      facts,
      leftOutBeforeSending: { rows: 3, kinds: [{ problem: 'time repeated', rows: 3 }] },
    });
    expect(some.status).toBe(202);
    await workJobs();
    const detail = (await steward.get(`${logsPath}/${(some.body as { logId: string }).logId}`)).body as VisitLogDetail;
    expect(detail).toMatchObject({ status: 'ready', rows: 1, leftOutRows: 14 + 3 });
    expect(detail.leftOut).toContainEqual({ problem: 'before arrival', rows: 2 });
    expect(detail.leftOut).toContainEqual({ problem: 'time repeated', rows: 3 });
  });

  test('the extract cannot be taken before its last time or in the future', async () => {
    const { checkId } = (await upload([canonicalHeader, good].join('\n'))).body as VisitLogCheck;
    for (const takenAt of [now - day, now + day]) {
      const refused = await steward.send('post', logsPath, {
        checkId,
        goodRowsOnly: false,
        facts: { ...facts, takenAt },
      });
      expect(refused.status).toBe(400);
      expect((refused.body as { faults: { at: string }[] }).faults[0].at).toBe('facts.takenAt');
    }
  });
});

describe('a file that is refused leaves nothing behind', () => {
  const line = visitLine({ arrival: now - day });
  const broken: [name: string, body: string | Buffer, message: RegExp][] = [
    ['empty', '', /The file is empty/],
    ['blank lines only', '\n\n  \n', /The file is empty/],
    ['header only', `${canonicalHeader}\n`, /a header but no visits/],
    ['wrong columns', 'when,where\n1,2\n', /arrival_at is missing/],
    ['no header', `${line}\n${line}\n`, /arrival_at is missing/],
    ['duplicated header', `arrival_at,arrival_at,care_area\n`, /names arrival_at twice/],
    ['nameless column', `arrival_at,care_area,\n`, /no name in the header/],
    ['too many columns', `${Array.from({ length: 300 }, (_, i) => `c${String(i)}`).join(',')}\n`, /300 columns/],
    ['binary with NUL', Buffer.concat([Buffer.from(`${canonicalHeader}\n`), Buffer.alloc(64)]), /binary file/],
    ['NUL far inside', `${canonicalHeader}\n${`${line}\n`.repeat(400)}\0\n`, /NUL/],
    ['a workbook', Buffer.from('PK\u0003\u0004 and so on'), /spreadsheet workbook or a zip/],
    ['an old workbook', Buffer.from([0xd0, 0xcf, 0x11, 0xe0, 0xa1]), /old spreadsheet workbook/],
    ['a PDF', Buffer.from('%PDF-1.7 and so on'), /PDF/],
    ['UTF-16', Buffer.from(`\uFEFF${canonicalHeader}\n${line}\n`, 'utf16le'), /UTF-16/],
    [
      'Windows-1252',
      Buffer.from(`${canonicalHeader}\n${line.replace('Acute', 'Caf\u00e9')}\n`, 'latin1'),
      /not encoded in UTF-8/,
    ],
    [
      'an open quotation mark',
      `${canonicalHeader}\n${line}\n"${line}\n${line}\n`,
      /quotation mark is opened at or after row 2/,
    ],
    [
      'an open quotation mark in a long file',
      `${canonicalHeader}\n"${line}\n${`${line}\n`.repeat(3000)}`,
      /quotation mark is opened at or after row 1/,
    ],
    ['a very long line', `${canonicalHeader}\n${'x'.repeat(3_000_000)}`, /line longer than 100,000/],
    ['no good row', `${canonicalHeader}\nyesterday,,,,Acute,home,no\n`, /time cannot be read/],
    ['semicolons', `${canonicalHeader.replaceAll(',', ';')}\n`, /not separated by commas/],
    [
      'mixed date formats only',
      `${canonicalHeader}\n21/09/2026 10:00,,,,Acute,,\n09/21/2026 10:00,,,,Acute,,\n`,
      /2 rows, row 1, 2/,
    ],
  ];
  test.each(broken)('%s', async (_, body, message) => {
    const refused = await upload(body);
    expect(refused.status, refused.text).toBe(422);
    expect(refused.text).toMatch(message);
    expect(refused.body).toMatchObject({ kept: 'The file was deleted and nothing was stored.' });
    await expectNothingKept();
  });

  test('a damaged gzip, and one cut short', async () => {
    const packed = gzipSync(buildVisitCsv({ from: midnight - day, rows: 100 }));
    for (const body of [packed.subarray(0, packed.length - 20), Buffer.from('not gzip at all')]) {
      const refused = await upload(body, { type: 'application/gzip' });
      expect(refused.status).toBe(422);
      expect(refused.text).toMatch(/gzip file is damaged or cut short/);
    }
    await expectNothingKept();
  });

  test('another content type', async () => {
    expect((await upload('{}', { type: 'text/plain' })).status).toBe(415);
    await expectNothingKept();
  });

  test('a duplicate names the log that holds the same file', async () => {
    const csv = buildVisitCsv({ from: midnight - 3 * day, rows: 20 });
    const logId = await load(csv);
    const again = await upload(csv);
    expect(again.status).toBe(409);
    expect(again.text).toContain(logId);
    expect(readdirSync(join(server.deps.config.dataDir, 'tmp'))).toEqual([]);
    // Once withdrawn it may come again.
    await steward.send('post', `${logsPath}/${logId}/withdrawal`, { reason: 'To load it again' });
    expect((await upload(csv)).status).toBe(201);
  });

  test('two checks of the same file: the second acceptance is refused', async () => {
    const csv = buildVisitCsv({ from: midnight - 3 * day, rows: 20 });
    const [first, second] = [(await upload(csv)).body as VisitLogCheck, (await upload(csv)).body as VisitLogCheck];
    const replies = await Promise.all(
      [first, second].map(({ checkId }) => steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts })),
    );
    expect(replies.map((reply) => reply.status).sort()).toEqual([202, 409]);
    await workJobs();
  });
});

describe('planted identifiers sent past the browser', () => {
  test.each(plantedValues)('a %s among values (%s), in any column', async (kind, value) => {
    const clean = buildVisitCsv({ from: midnight - 5 * day, rows: 40 });
    for (const column of ['arrival', 'departure', 'area', 'disposition', 'ambulance'] as const) {
      const refused = await upload(`${clean}${visitLine({ arrival: now - day, [column]: value })}\n`);
      expect(refused.status, `${column}: ${refused.text}`).toBe(422);
      expect(refused.body).toMatchObject({ title: 'The file could identify patients' });
      expect(refused.text).toContain(kind);
      expect(refused.text).not.toContain(value);
    }
    await expectNothingKept();
  });

  test.each(plantedHeaders)('a %s column (%s)', async (kind, header) => {
    const refused = await upload(`arrival_at,care_area,${header}\n2026-09-20T10:00:00Z,Acute,x\n`);
    expect(refused.status).toBe(422);
    expect((refused.body as { faults: { at: string; message: string }[] }).faults[0]).toMatchObject({ at: 'column 3' });
    expect(refused.text).toContain(kind);
    await expectNothingKept();
  });
});

describe('uploads that do not end', () => {
  /** Sends a request of its own to a listening copy of the application; the test decides when it ends. */
  async function startUpload(contentLength: number) {
    const listening = createServer(server.app.express).listen(0, '127.0.0.1');
    await once(listening, 'listening');
    const { port } = listening.address() as AddressInfo;
    const options: RequestOptions = {
      port,
      method: 'POST',
      path: `${logsPath}/checks`,
      headers: {
        cookie: steward.cookie,
        'x-csrf-token': steward.csrfToken,
        'content-type': 'text/csv',
        'content-length': contentLength,
      },
    };
    return { request: httpRequest(options), close: () => listening.close() };
  }

  test('a 2 GB file is refused at once, by its stated length', async () => {
    const { request, close } = await startUpload(2e9);
    request.write('arrival_at,care_area\n');
    const [response] = (await once(request, 'response')) as [{ statusCode: number }];
    expect(response.statusCode).toBe(413);
    request.on('error', () => undefined);
    request.destroy();
    close();
    await expectNothingKept();
  });

  test('a half-sent upload leaves no file', async () => {
    const folder = join(server.deps.config.dataDir, 'tmp');
    const { request, close } = await startUpload(1e6);
    request.on('error', () => undefined);
    request.write(buildVisitCsv({ from: midnight - day, rows: 100 }));
    await expect.poll(() => existsSync(folder) && readdirSync(folder).length).toBe(1);
    request.destroy();
    await expect.poll(() => readdirSync(folder)).toEqual([]);
    close();
    await expectNothingKept();
  });
});

describe('checks that wait', () => {
  test('are over after their hour, and can be discarded', async () => {
    const first = (await upload(buildVisitCsv({ from: midnight - 3 * day, rows: 20 }))).body as VisitLogCheck;
    server.time.now = now + 3601;
    const late = await steward.send('post', logsPath, { checkId: first.checkId, goodRowsOnly: false, facts });
    expect(late.status).toBe(404);
    server.time.now = now;
    expect((await steward.send('delete', `${logsPath}/checks/${first.checkId}`)).status).toBe(204);
    expect((await steward.send('delete', `${logsPath}/checks/${first.checkId}`)).status).toBe(404);
    await expectNothingKept();
  });

  test('belong to their site', async () => {
    const check = (await upload(buildVisitCsv({ from: midnight - 3 * day, rows: 20 }))).body as VisitLogCheck;
    const elsewhere = await buildSite(server.deps.database);
    const other = await server.signedInAs(
      (await buildPerson(server.deps.database, [{ role: 'steward', siteId: elsewhere.site.id }])).id,
    );
    const path = `/api/sites/${elsewhere.site.id}/visit-logs`;
    expect((await other.send('post', path, { checkId: check.checkId, goodRowsOnly: false, facts })).status).toBe(404);
    expect((await other.send('delete', `${path}/checks/${check.checkId}`)).status).toBe(404);
  });
});

describe('a load that is broken off', () => {
  test('cancelled before it began: the log fails and the file may come again', async () => {
    await workJobs();
    const csv = buildVisitCsv({ from: midnight - 3 * day, rows: 20 });
    const { checkId } = (await upload(csv)).body as VisitLogCheck;
    await server.deps.jobs.stop();
    jobsStarted = false;
    const { logId, jobId } = (await steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts })).body as {
      logId: string;
      jobId: string;
    };
    await server.deps.jobs.cancel(jobId);
    expect(await findLog(logId)).toMatchObject({ status: 'failed', reason: 'Cancelled. Nothing had been loaded.' });
    await workJobs();
    expect((await upload(csv)).status).toBe(201);
  });

  test('begun again after a crash in the middle: rows of the first attempt do not remain', async () => {
    const csv = buildVisitCsv({ from: midnight - 3 * day, rows: 50 });
    const { checkId } = (await upload(csv)).body as VisitLogCheck;
    await workJobs();
    await server.deps.jobs.stop();
    jobsStarted = false;
    const { logId } = (await steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts })).body as {
      logId: string;
    };
    const { number } = await findLog(logId);
    // What a process that died after some batches would have left.
    await server.deps.database.write((manager) =>
      manager.insert(Visit, [
        { logNumber: number, rowNumber: 1, areaCode: 0, arrivalAt: 5 },
        { logNumber: number, rowNumber: 4711, areaCode: 0, arrivalAt: 5 },
      ]),
    );
    expect(readSiteVisits(server.deps.database.file, built.site.id).table.length).toBe(0);
    await sweepVisitLogs(server.deps);
    await workJobs();
    expect((await findLog(logId)).status).toBe('ready');
    expect(await visitsOf(number)).toBe(50);
  });

  test('the care areas changed since the check: failed, nothing kept', async () => {
    const { checkId } = (await upload(buildVisitCsv({ from: midnight - 3 * day, rows: 50 }))).body as VisitLogCheck;
    await server.deps.database.write((manager) =>
      manager.query('UPDATE "care_area" SET "name" = ? WHERE "id" = ?', ['Renamed', built.areas[1].id]),
    );
    const { logId } = (await steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts })).body as {
      logId: string;
    };
    await workJobs();
    const log = await findLog(logId);
    expect(log).toMatchObject({ status: 'failed', reason: expect.stringContaining('Send the file again') as string });
    expect(await visitsOf(log.number)).toBe(0);
    expect(readdirSync(join(server.deps.config.dataDir, 'tmp')).filter((name) => name.includes(checkId))).toEqual([]);
  });
});
