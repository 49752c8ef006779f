import { readdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { ExposureGap } from '../../shared/api/exposure-gaps.ts';
import type { RememberedMapping } from '../../shared/api/visit-log-mapping.ts';
import type { VisitLogCheck, VisitLogDetail } from '../../shared/api/visit-logs.ts';
import { canonicalHeader } from '../../shared/domain/canonical-visit.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { VisitLogMapping } from '../../server/entities/VisitLogMapping.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitCsv, visitLine } from '../support/build-visit-csv.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
const hour = 3600;
/** 2026-09-21T14:13:20Z, a Monday. */
const now = 1_790_000_000;
const midnight = now - (now % day);

let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;
let sitePath: string;
let logsPath: string;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  rmSync(join(server.deps.config.dataDir, 'tmp'), { recursive: true, force: true });
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }], 'Sam Steward');
  steward = await server.signedInAs(person.id);
  sitePath = `/api/sites/${built.site.id}`;
  logsPath = `${sitePath}/visit-logs`;
});

const facts = {
  selectedBy: 'arrived',
  takenAt: now,
  missingDeparture: 'still present',
  arrivalMeaning: 'offload',
  areaMeaning: 'longest',
};

function mapping(more: Partial<RememberedMapping> = {}): RememberedMapping {
  return {
    columns: {
      arrival_at: 'Arr Time',
      bed_space_at: null,
      admission_decision_at: null,
      departure_at: 'Left Dept',
      care_area: 'Unit',
      disposition: 'Outcome',
      arrived_by_ambulance: null,
    },
    dateOrder: 'day first',
    repeatedHour: 'earlier',
    areas: [
      { value: 'ACU', areaId: built.areas[0].id },
      { value: 'XRAY', areaId: null },
    ],
    dispositions: [{ value: 'Went home', code: 0 }],
    ambulances: [],
    selectedBy: 'arrived',
    missingDeparture: 'still present',
    arrivalMeaning: 'offload',
    areaMeaning: 'longest',
    ...more,
  };
}

async function check(csv: string): Promise<VisitLogCheck> {
  const reply = await steward.send('post', `${logsPath}/checks`).set('content-type', 'text/csv').send(csv);
  expect(reply.status, reply.text).toBe(201);
  return reply.body as VisitLogCheck;
}

async function accept(csv: string, more: object = {}) {
  const { checkId } = await check(csv);
  return steward.send('post', logsPath, { checkId, goodRowsOnly: false, facts, ...more });
}

const clean = (from = midnight - 5 * day, rows = 48) => buildVisitCsv({ from, rows, everySeconds: hour });
const remembered = async () =>
  (await steward.get(`${sitePath}/visit-log-mapping`)).body as {
    remembered: { mapping: RememberedMapping; savedBy: string; savedAt: number } | null;
  };

describe('the mapping of the last file', () => {
  test('is none before the first, then what was accepted last, of this site only', async () => {
    expect(await remembered()).toEqual({ remembered: null });
    expect((await accept(clean(), { mapping: mapping() })).status).toBe(202);
    expect(await remembered()).toEqual({
      remembered: { mapping: mapping(), savedBy: 'Sam Steward', savedAt: now },
    });
    const second = mapping({ repeatedHour: 'refuse', areaMeaning: 'last' });
    expect((await accept(clean(midnight - 20 * day), { mapping: second })).status).toBe(202);
    expect((await remembered()).remembered?.mapping).toEqual(second);
    expect(await server.deps.database.read.countBy(VisitLogMapping, { siteId: built.site.id })).toBe(1);
    // A file that needed no mapping leaves it as it is.
    expect((await accept(clean(midnight - 30 * day))).status).toBe(202);
    expect((await remembered()).remembered?.mapping).toEqual(second);
  });

  test('that holds an identifier is refused with the log, naming column and kind, never the value', async () => {
    const refused = await accept(clean(), {
      mapping: mapping({
        columns: { ...mapping().columns, departure_at: 'Date of Birth' },
        areas: [{ value: 'olivia.fairweather@post.example', areaId: built.areas[0].id }],
        dispositions: [{ value: '943 476 5919', code: 0 }],
      }),
    });
    expect(refused.status).toBe(400);
    expect((refused.body as { faults: object[] }).faults).toEqual([
      { at: 'header of Departure', message: 'It looks like a date of birth and cannot be remembered.' },
      { at: 'values of Care area', message: 'It looks like an e-mail address and cannot be remembered.' },
      { at: 'values of Disposition', message: 'It looks like a national patient number and cannot be remembered.' },
    ]);
    expect(refused.text).not.toMatch(/fairweather|5919/);
    expect(await remembered()).toEqual({ remembered: null });
    expect(await server.deps.database.read.countBy(VisitLog, { siteId: built.site.id })).toBe(0);
  });

  test('keeps no word that is shaped like a name or a number, and no area of another site', async () => {
    const odd = [
      { value: 'Okell, Bram', areaId: null },
      { value: '88123456', areaId: null },
      { value: 'ACU', areaId: built.areas[0].id },
    ];
    expect((await accept(clean(), { mapping: mapping({ areas: odd }) })).status).toBe(202);
    expect((await remembered()).remembered?.mapping.areas).toEqual(odd.slice(2));

    const elsewhere = await buildSite(server.deps.database);
    const foreign = mapping({ areas: [{ value: 'ACU', areaId: elsewhere.areas[0].id }] });
    expect((await accept(clean(midnight - 20 * day), { mapping: foreign })).status).toBe(400);
  });
});

test('what arrival and care area mean stays with the log; a log of which nobody was asked says so', async () => {
  const first = (await accept(clean())).body as { logId: string };
  const detail = (await steward.get(`${logsPath}/${first.logId}`)).body as VisitLogDetail;
  expect(detail.facts).toEqual(facts);
  const { selectedBy, takenAt, missingDeparture } = facts;
  const plain = await accept(clean(midnight - 20 * day), { facts: { selectedBy, takenAt, missingDeparture } });
  const unasked = (await steward.get(`${logsPath}/${(plain.body as { logId: string }).logId}`)).body as VisitLogDetail;
  expect(unasked.facts).toMatchObject({ arrivalMeaning: null, areaMeaning: null });
});

describe('problem rows of a check', () => {
  const csv = [
    canonicalHeader,
    visitLine({ arrival: now - day, departure: now - day + hour }),
    visitLine({ arrival: now - day, area: 'Maternity', departure: now - 2 * day }),
    visitLine({ arrival: 'soon' }),
    visitLine({ arrival: now - day, departure: now - 2 * day }),
  ].join('\n');

  test('are told as CSV, all or one kind, as long as the check is kept', async () => {
    const { checkId } = await check(csv);
    const path = `${logsPath}/checks/${checkId}/problem-rows`;
    const all = await steward.get(path);
    expect(all.headers['content-type']).toBe('text/csv; charset=utf-8');
    expect(all.text).toBe(
      'row,column,kind\r\n2,care_area,area unknown\r\n2,departure_at,before arrival\r\n3,arrival_at,time unreadable\r\n4,departure_at,before arrival\r\n',
    );
    const one = await steward.get(`${path}?kind=${encodeURIComponent('before arrival')}`);
    expect(one.text).toBe('row,column,kind\r\n2,departure_at,before arrival\r\n4,departure_at,before arrival\r\n');
    expect((await steward.get(`${path}?kind=nothing`)).status).toBe(400);

    expect((await steward.send('delete', `${logsPath}/checks/${checkId}`)).status).toBe(204);
    expect((await steward.get(path)).status).toBe(404);
    expect(readdirSync(join(server.deps.config.dataDir, 'tmp'))).toEqual([]);
  });

  test('of a file without any are a header alone', async () => {
    const { checkId } = await check(clean());
    expect((await steward.get(`${logsPath}/checks/${checkId}/problem-rows`)).text).toBe('row,column,kind\r\n');
  });
});

describe('the study of a check', () => {
  test('tells gaps by area id, and what accepting would change against the logs that count', async () => {
    const from = midnight - 60 * day;
    const older = (await accept(clean(from, 10 * 24))).body as { logId: string };
    await server.workJobs();
    const lines = clean(from + 5 * day, 40 * 24)
      .trimEnd()
      .split('\n');
    // Ten days without Resuscitation, which every second row holds.
    const lacking = lines.filter((line, index) => !(index > 480 && index <= 720 && line.includes('Resuscitation')));
    const checked = await check(lacking.join('\n'));
    expect(checked.study?.levelShifts).toEqual([]);
    const [gap, ...others] = checked.study?.gaps ?? [];
    expect(others).toEqual([]);
    expect(gap.areaId).toBe(built.areas[1].id);
    expect((gap.to - gap.from) / hour).toBeGreaterThanOrEqual(240);
    const olderPeriod = ((await steward.get(`${logsPath}/${older.logId}`)).body as VisitLogDetail).period;
    const period = checked.period ?? { from: 0, to: 0 };
    const replaced = (olderPeriod.to - period.from) / hour;
    expect(checked.accepting).toEqual({
      newRows: lacking.length - 1 - (olderPeriod.to - (from + 5 * day)) / hour,
      newHours: (period.to - period.from) / hour - replaced,
      replaces: [{ id: older.logId, hours: replaced }],
    });
  });
});

describe('outages and diversions', () => {
  const declare = (more: object = {}) =>
    steward.send('post', `${sitePath}/exposure-gaps`, {
      kind: 'diversion',
      areaId: built.areas[0].id,
      from: midnight - 3 * day,
      until: midnight - 2 * day,
      reason: 'Ambulances sent to the next hospital',
      ...more,
    });
  const list = async () => ((await steward.get(`${sitePath}/exposure-gaps`)).body as { gaps: ExposureGap[] }).gaps;

  test('are declared, listed newest first and removed, with who and when, and the trail keeps both', async () => {
    const first = await declare();
    expect(first.status).toBe(201);
    const second = await declare({ kind: 'outage', areaId: null, from: midnight - day, until: midnight });
    expect(second.body).toMatchObject({ kind: 'outage', areaId: null, declaredBy: 'Sam Steward', declaredAt: now });
    expect(await list()).toEqual([second.body, first.body]);
    expect((await declare()).status).toBe(409);

    const { id } = first.body as ExposureGap;
    expect((await steward.send('delete', `${sitePath}/exposure-gaps/${id}`)).status).toBe(204);
    expect((await steward.send('delete', `${sitePath}/exposure-gaps/${id}`)).status).toBe(404);
    expect(await list()).toEqual([second.body]);
    const events = await server.deps.database.read.findBy(AuditEvent, { siteId: built.site.id });
    expect(events.map(({ event }) => event)).toEqual([
      'exposure-gap.declared',
      'exposure-gap.declared',
      'exposure-gap.removed',
    ]);
    expect(events.map(({ detail }) => detail).join()).not.toContain('Ambulances');
  });

  test('are refused with every fault at once', async () => {
    const elsewhere = await buildSite(server.deps.database);
    const refused = await declare({
      areaId: elsewhere.areas[0].id,
      from: now + 90 * day,
      until: now + 80 * day,
      reason: 'Mrs Fairweather said so',
    });
    expect(refused.status).toBe(400);
    expect((refused.body as { faults: { at: string }[] }).faults.map(({ at }) => at)).toEqual([
      'until',
      'until',
      'reason',
      'areaId',
    ]);
    expect(refused.text).not.toContain('Fairweather');
    expect(await list()).toEqual([]);
  });
});
