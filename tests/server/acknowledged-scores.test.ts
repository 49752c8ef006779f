import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Acknowledgement } from '../../shared/api/acknowledgements.ts';
import type { TrackRecord } from '../../shared/api/track-record.ts';
import { ForecastScore } from '../../server/entities/ForecastScore.ts';
import { scoreJob } from '../../server/features/track-record/score-outlooks.job.ts';
import { fitModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** Monday 2026-11-02, 20:00 at the site: an hour before the night shift. */
const start = Date.parse('2026-11-02T20:00:00Z') / 1000;
const day = 86_400;
const days = 24;

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
/** Hours that somebody acknowledged, all of Acute. */
const acknowledged = new Set<number>();
const path = (rest: string) => `/api/sites/${built.site.id}/${rest}`;
const record = async (query = '') => (await operations.get(path(`track-record${query}`))).body as TrackRecord;

/** Every other evening the charge nurse enters a full department and acknowledges what passes the limit. */
beforeAll(async () => {
  server = await openTestServer({ now: start, replications: 60 });
  const { database } = server.deps;
  built = await buildSite(database);
  const role = { siteId: built.site.id };
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', ...role }])).id);
  const charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', ...role }])).id);
  const model = await fitModel(server, built, 16);
  const plan = await operations.send('put', path('staffed-beds'), flatPlan(built.areas, [8, 4]));
  expect(plan.status, plan.text).toBe(200);
  const approval = await operations.send('post', path(`arrival-models/${model.id}/approval`), { reason: 'Agrees' });
  expect(approval.status, approval.text).toBe(200);
  await server.issuer.settle();
  for (let evening = 0; evening < days; evening += 1) {
    server.time.now = start + evening * day;
    if (evening % 2 === 0) {
      const count = (areaId: string, present: number) => ({ areaId, present, waiting: 0, boarding: 0 });
      const census = await charge.send('post', path('censuses'), {
        takenAt: server.time.now,
        areas: [count(built.areas[0].id, 11), count(built.areas[1].id, 0)],
        undecidedWaiting: null,
        ambulancesHolding: null,
        arrivalsSinceMidnight: null,
      });
      expect(census.status, census.text).toBe(201);
      const reply = await charge.send('post', path('acknowledgements'), {
        areaId: built.areas[0].id,
        outlookId: (census.body as { outlookId: string }).outlookId,
        note: 'Site manager called, two beds opened',
      });
      expect(reply.status, reply.text).toBe(201);
      for (const at of (reply.body as Acknowledgement).hours) acknowledged.add(at);
    }
    await server.issuer.issue(built.site.id, 'timetable');
  }
  await server.issuer.settle();
  const now = start + days * day;
  server.time.now = now;
  const from = start - (start % day);
  const log = { periodFrom: from, periodTo: now, takenAt: now };
  await buildVisitLog(database, built, inventVisits(built, from, now, 11), log);
  await database.write((manager) => server.deps.jobs.enqueue(manager, scoreJob(built.site.id, from, now)));
  await server.workJobs();
}, 240_000);
afterAll(() => server.close());

test('a score is marked if its hour was acknowledged in its area, or in any for the whole department', async () => {
  const scores = await server.deps.database.read.findBy(ForecastScore, { siteId: built.site.id, measure: 'need' });
  expect(acknowledged.size).toBeGreaterThan(3);
  expect(scores.some(({ acknowledged: marked }) => marked === 1)).toBe(true);
  expect(scores.some(({ acknowledged: marked }) => marked === 0)).toBe(true);
  for (const { areaId, fromAt, acknowledged: marked } of scores) {
    const seen = areaId !== built.areas[1].id && acknowledged.has(fromAt);
    expect([areaId, fromAt, marked]).toEqual([areaId, fromAt, seen ? 1 : 0]);
  }
});

test('what has no chance of shortfall cannot be acknowledged', async () => {
  const marked = { siteId: built.site.id, measure: 'arrivals' as const, acknowledged: 1 };
  expect(await server.deps.database.read.countBy(ForecastScore, marked)).toBe(0);
  const { acknowledged: parts, verdict } = await record('?measure=arrivals');
  expect(parts).toEqual([]);
  expect(verdict.acknowledged).toContain('No chance of shortfall was issued');
});

test('the record tells them apart: table, sentence, chances without them and points that say so', async () => {
  const area = built.areas[0].id;
  const { read } = server.deps.database;
  const filter = { siteId: built.site.id, measure: 'need' as const, leadHours: 4, areaId: area };
  const rows = await read.findBy(ForecastScore, filter);
  const reply = await record(`?lead=4&area=${area}`);
  // Worked out anew from the scores, by the definitions of a mean and of a share.
  const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const maseOf = (own: ForecastScore[]) =>
    mean(own.map(({ absoluteError }) => absoluteError!)) / mean(own.map(({ naiveError }) => naiveError!));
  const expected = (own: ForecastScore[]) => ({
    n: own.length,
    meanChance: mean(own.map(({ chance }) => chance!)),
    share: mean(own.map(({ short }) => short!)),
    coverage90: mean(
      own.map(({ intervals, observed }) => {
        const [low, high] = (JSON.parse(intervals!) as [number, number, number][])[2];
        return observed >= low && observed <= high ? 1 : 0;
      }),
    ),
    mase: maseOf(own.filter(({ naiveError }) => naiveError !== null)),
  });
  const seen = rows.filter((row) => row.acknowledged === 1);
  const open = rows.filter((row) => row.acknowledged === 0);
  expect(seen.length).toBeGreaterThan(2);
  expect(open.length).toBeGreaterThan(2);
  expect(reply.acknowledged.map(({ key }) => key)).toEqual(['yes', 'no', 'all']);
  for (const [index, own] of [seen, open, rows].entries()) {
    const part = reply.acknowledged[index];
    const { n, ...figures } = expected(own);
    expect(part.n).toBe(n);
    for (const [name, value] of Object.entries(figures)) {
      expect(part[name as keyof typeof figures], `${part.name}: ${name}`).toBeCloseTo(value, 10);
    }
  }
  // The reliability is that of the hours which nobody acknowledged; ranges and counts are of all.
  expect(reply.summary.n).toBe(rows.length);
  expect(reply.summary.calledFor.n).toBe(open.length);
  expect(reply.summary.chances.reduce((sum, { n }) => sum + n, 0)).toBe(open.length);
  expect(reply.verdict.acknowledged).toMatch(
    new RegExp(
      `^${String(seen.length)} hours with an acknowledged risk were given \\d+ chances in 100 .*; the others \\d+ `,
    ),
  );
  expect(reply.points.filter((point) => point.acknowledged).map(({ from }) => from)).toEqual(
    seen.map(({ fromAt }) => fromAt).sort((a, b) => b - a),
  );
  const csv = (await operations.get(path(`track-record.csv?lead=4&area=${area}`))).text.split('\r\n');
  const column = csv
    .find((line) => line.startsWith('outlook,'))!
    .split(',')
    .indexOf('acknowledged');
  expect(csv.filter((line) => line.split(',')[column] === 'yes')).toHaveLength(seen.length);
});
