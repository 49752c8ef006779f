import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import type { ModelDetail } from '../../shared/api/arrival-models.ts';
import type { VisitLogCheck, VisitLogDetail } from '../../shared/api/visit-logs.ts';
import { canonicalCountHeader } from '../../shared/domain/canonical-count.ts';
import { streamsPerArea } from '../../shared/forecasting/stay-model.ts';
import { readArrivals } from '../../server/database/read-arrivals.ts';
import { readModelParameters } from '../../server/database/read-model.ts';
import { presentInLogs } from '../../server/database/read-present.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { HourlyCountRow } from '../../server/entities/HourlyCountRow.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { brokenCountFiles } from '../support/broken-count-files.ts';
import { brokenAt } from '../support/broken-visit-files.ts';
import { buildCountCsv, countLine } from '../support/build-count-csv.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** 2026-09-21T14:13:20Z, a Monday; 15:13 in London. */
const now = brokenAt;
const day = 86_400;
/** 2026-09-20T23:00Z, midnight in London. */
const midnight = now - (now % day) - 3600;
const from = midnight - 70 * day;

let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;
let logs: string;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = now;
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }], 'Sam Steward');
  steward = await server.signedInAs(person.id);
  logs = `/api/sites/${built.site.id}/visit-logs`;
});

const check = (body: string | Buffer) =>
  steward.send('post', `${logs}/checks`).set('content-type', 'text/csv').send(body);
const facts = { selectedBy: 'departed', takenAt: now, missingDeparture: 'still present' };
const accept = (checkId: string, more: object = {}) =>
  steward.send('post', logs, { checkId, goodRowsOnly: false, facts, ...more });
const faultsOf = (body: unknown) =>
  (body as { faults: { at: string; message: string }[] }).faults.map(({ at, message }) => `${at}: ${message}`);
const invented = (departures: boolean) => {
  const visits = inventVisits(built, from - 10 * day, now);
  const { areas, site } = built;
  return { visits, csv: buildCountCsv(visits, { from, to: midnight, areas, timeZone: site.timeZone, departures }) };
};

const means = () => ({
  statedStays: { source: 'Annual report', areas: built.areas.map(({ id }) => ({ areaId: id, meanHours: 4 })) },
});

async function load(csv: string, more: object = means()): Promise<string> {
  const checked = await check(csv);
  expect(checked.status, checked.text).toBe(201);
  const accepted = await accept((checked.body as VisitLogCheck).checkId, more);
  expect(accepted.status, accepted.text).toBe(202);
  await server.workJobs();
  return (accepted.body as { logId: string }).logId;
}

async function fitted(): Promise<ArrivalModelRow> {
  const asked = await steward.send('post', `/api/sites/${built.site.id}/arrival-models`, {});
  expect(asked.status, asked.text).toBe(202);
  await server.workJobs();
  const { modelId } = asked.body as { modelId: string };
  return server.deps.database.read.findOneByOrFail(ArrivalModelRow, { id: modelId });
}

test.each(brokenCountFiles)('refused whole, with nothing kept: $name', async ({ body, said }) => {
  const reply = await check(body);
  expect(reply.status, reply.text).toBe(422);
  expect(faultsOf(reply.body)).toEqual(said);
  const folder = join(server.deps.config.dataDir, 'tmp');
  expect(existsSync(folder) ? readdirSync(folder) : []).toEqual([]);
  expect(await server.deps.database.read.countBy(VisitLog, { siteId: built.site.id })).toBe(0);
});

test('counts with departures are checked, loaded and stored hour by hour, and say what they are', async () => {
  const { visits, csv } = invented(true);
  const checked = await check(csv);
  expect(checked.status, checked.text).toBe(201);
  const report = checked.body as VisitLogCheck;
  const hours = (midnight - from) / 3600;
  expect(report).toMatchObject({
    kind: 'hourly counts',
    needsMean: built.areas.map(({ id }) => id),
    rows: 2 * hours,
    goodRows: 2 * hours,
  });
  expect(report.period).toEqual({ from, to: midnight });
  expect(report.study?.heaps).toEqual([]);
  const within = visits.filter(({ arrivalAt }) => arrivalAt >= from && arrivalAt < midnight);
  expect(report.visitsByArea.reduce((sum, area) => sum + area.visits, 0)).toBe(within.length);
  expect(report.accepting).toMatchObject({ newRows: within.length, newHours: hours, replaces: [] });

  const logId = await load(csv);
  const detail = (await steward.get(`${logs}/${logId}`)).body as VisitLogDetail;
  expect(detail).toMatchObject({ kind: 'hourly counts', status: 'ready', statedStays: { source: 'Annual report' } });
  // Whatever the sender says of visits: counts hold who came in each hour, and nobody's departure.
  expect(detail.facts).toMatchObject({ selectedBy: 'arrived', missingDeparture: 'unknown' });
  const log = await server.deps.database.read.findOneByOrFail(VisitLog, { id: logId });
  expect(await server.deps.database.read.countBy(HourlyCountRow, { logNumber: log.number })).toBe(2 * hours);
});

test('arrivals are read back by hour and day; who was present is not known of counts', async () => {
  const { visits, csv } = invented(true);
  await load(csv);
  const { database } = server.deps;
  const spans = [midnight - 3 * day, midnight - 2 * day, midnight - day].map((at) => ({ from: at, to: at + day }));
  const counted = await readArrivals(database.read, built.site, spans, now);
  expect(counted.map(({ count }) => count)).toEqual(
    spans.map((span) => visits.filter(({ arrivalAt }) => arrivalAt >= span.from && arrivalAt < span.to).length),
  );
  const half = await readArrivals(database.read, built.site, [{ from: midnight - day + 1800, to: midnight }], now);
  expect(half[0].count).toBeNull();
  const present = await presentInLogs(database.read, built.site, built.areas, [midnight - day], now);
  expect(present).toEqual([[null], [null]]);
});

test('visits count before hourly counts of the same time', async () => {
  const { visits, csv } = invented(true);
  const { database } = server.deps;
  const half = midnight - 35 * day;
  const first = visits.filter(({ arrivalAt }) => arrivalAt >= from && arrivalAt < half);
  await buildVisitLog(database, built, first, { periodFrom: from, periodTo: half, takenAt: now });
  const logId = await load(csv);
  const detail = (await steward.get(`${logs}/${logId}`)).body as VisitLogDetail;
  expect(detail.counts).toEqual([{ from: half, to: midnight }]);
  const days = [half - day, half].map((at) => ({ from: at, to: at + day }));
  const counted = await readArrivals(database.read, built.site, days, now);
  expect(counted.map(({ count }) => count)).toEqual(
    days.map((span) => visits.filter(({ arrivalAt }) => arrivalAt >= span.from && arrivalAt < span.to).length),
  );
  // Stays come from the visits then.
  expect(await fitted()).toMatchObject({ error: null, staysFrom: null });
});

test('a model is fitted on counts with departures: the stated mean, the counted pace, and what it cannot know', async () => {
  const { visits, csv } = invented(true);
  // The drawn visits' own mean stays, as a site would know them.
  const areas = built.areas.map(({ id }) => {
    const own = visits.filter(({ areaId, departureAt }) => areaId === id && departureAt !== null);
    const hours = own.reduce((sum, visit) => sum + ((visit.departureAt ?? 0) - visit.arrivalAt) / 3600, 0);
    return { areaId: id, meanHours: Math.round((hours / own.length) * 10) / 10 };
  });
  await load(csv, { statedStays: { source: 'Annual report', areas } });
  const model = await fitted();
  expect(model).toMatchObject({
    error: null,
    status: 'candidate',
    staysFrom: 'departures by hour',
    trainedTo: midnight,
  });
  expect(model.visits).toBe(visits.filter(({ arrivalAt }) => arrivalAt >= from && arrivalAt < midnight).length);
  const { stay } = await readModelParameters(server.deps.database.read, model.id);
  areas.forEach(({ meanHours }, area) => {
    const { hazard } = stay.streams[area * streamsPerArea];
    expect(Math.abs(hazard.rate / hazard.shape / meanHours - 1)).toBeLessThan(0.06);
  });
  const detail = (await steward.get(`/api/sites/${built.site.id}/arrival-models/${model.id}`)).body as ModelDetail;
  expect(detail.staysFrom).toBe('departures by hour');
  const cautions = detail.findings.filter(({ name }) => name === 'Caution').map(({ meaning }) => meaning);
  expect(cautions.some((text) => text.startsWith('Fitted on hourly counts: only mean stays are known.'))).toBe(true);
  expect(cautions.some((text) => text.startsWith('Acute: a mean stay of'))).toBe(true);
});

test('a mean stay has to be stated for each area, with its source', async () => {
  const { csv } = invented(false);
  const checked = (await check(csv)).body as VisitLogCheck;
  const [acute, resus] = built.areas;
  expect(checked.needsMean).toEqual([acute.id, resus.id]);
  const none = await accept(checked.checkId);
  expect(none.status).toBe(400);
  expect(faultsOf(none.body)).toEqual([
    'statedStays: State the mean length of stay of Acute, with where the figure is from: hourly counts do not tell it.',
    'statedStays: State the mean length of stay of Resuscitation, with where the figure is from: hourly counts do not tell it.',
  ]);
  const areas = [
    { areaId: acute.id, meanHours: 3.5 },
    { areaId: resus.id, meanHours: 5 },
  ];
  const named = await accept(checked.checkId, { statedStays: { source: 'Ask Mr John Smith', areas } });
  expect(faultsOf(named.body)).toEqual([
    'statedStays.source: It looks as if it held a name. Leave out anything that could identify a person.',
  ]);
  const source = 'Department’s annual report';
  const logId = await load(csv, { statedStays: { source, areas } });
  const detail = (await steward.get(`${logs}/${logId}`)).body as VisitLogDetail;
  expect(detail.statedStays).toEqual({
    source,
    areas: [
      { ...areas[0], name: 'Acute' },
      { ...areas[1], name: 'Resuscitation' },
    ],
  });
  const model = await fitted();
  expect(model).toMatchObject({ error: null, staysFrom: 'stated mean' });
  const { stay } = await readModelParameters(server.deps.database.read, model.id);
  expect(stay.streams[0].hazard.rate / stay.streams[0].hazard.shape).toBeCloseTo(3.5, 9);
});

test('no mean may be stated for an area that the file does not hold', async () => {
  const csv = `${canonicalCountHeader}\n${countLine({ date: '2026-09-20', hour: 1 })}\n`;
  const checked = (await check(csv)).body as VisitLogCheck;
  expect(faultsOf((await accept(checked.checkId, means())).body)).toEqual([
    'statedStays.areas.1.areaId: The file holds no arrival of this area: state no mean.',
  ]);
});

test('the hour that comes twice may stand in one row or in two, the skipped one as 0 or not at all', async () => {
  server.time.now = Date.parse('2026-10-26T12:00:00Z') / 1000;
  const fileOf = (rows: string[]) => `${[canonicalCountHeader, ...rows].join('\n')}\n`;
  const hours = Array.from({ length: 24 }, (_, hour) => hour);
  const autumn = hours.map((hour) => countLine({ date: '2026-10-25', hour, arrivals: 2 }));
  const once = (await check(fileOf(autumn))).body as VisitLogCheck;
  // 25 hours of which two carry one label.
  expect(once).toMatchObject({ rows: 24, period: { from: 1_792_882_800, to: 1_792_972_800 } });
  const twice = (await check(fileOf([...autumn, countLine({ date: '2026-10-25', hour: 1, arrivals: 5 })])))
    .body as VisitLogCheck;
  expect(twice.visitsByArea[0].visits).toBe(24 * 2 + 5);
  const thrice = await check(
    fileOf([...autumn, ...[1, 1].map((hour) => countLine({ date: '2026-10-25', hour, arrivals: 5 }))]),
  );
  expect(faultsOf(thrice.body)).toEqual([
    'hour (Hour): The same hour of the same area stands in an earlier row. 1 row, row 26.',
  ]);
  const spring = hours.map((hour) => countLine({ date: '2026-03-29', hour, arrivals: hour === 1 ? 0 : 2 }));
  const skipped = (await check(fileOf(spring))).body as VisitLogCheck;
  expect(skipped).toMatchObject({ rows: 23, period: { from: 1_774_742_400, to: 1_774_825_200 } });
});

test('withdrawn counts no longer count, and are deleted', async () => {
  const { csv } = invented(true);
  const logId = await load(csv);
  const log = await server.deps.database.read.findOneByOrFail(VisitLog, { id: logId });
  await steward.send('post', `${logs}/${logId}/withdrawal`, { reason: 'Wrong extract' });
  await server.workJobs();
  expect(await server.deps.database.read.countBy(HourlyCountRow, { logNumber: log.number })).toBe(0);
  const [span] = await readArrivals(
    server.deps.database.read,
    built.site,
    [{ from: midnight - day, to: midnight }],
    now,
  );
  expect(span.count).toBeNull();
});
