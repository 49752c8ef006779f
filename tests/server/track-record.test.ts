import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { TrackRecord } from '../../shared/api/track-record.ts';
import type { WeekAhead } from '../../shared/api/week-outlooks.ts';
import { ForecastScore } from '../../server/entities/ForecastScore.ts';
import { OutlookLawsRow } from '../../server/entities/OutlookLawsRow.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import { WeekOutlookRow } from '../../server/entities/WeekOutlookRow.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { fitModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** Saturday 2026-11-21, 13:00 at the site. */
const now = Date.parse('2026-11-21T13:00:00Z') / 1000;
const day = 86_400;
let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let steward: SignedIn;
const path = (rest = '') => `/api/sites/${built.site.id}/track-record${rest}`;
const record = async (query = '') => (await operations.get(path(query))).body as TrackRecord;

beforeAll(async () => {
  server = await openTestServer({ now, replications: 200 });
  const { database } = server.deps;
  built = await buildSite(database);
  const at = { siteId: built.site.id };
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', ...at }])).id);
  steward = await server.signedInAs((await buildPerson(database, [{ role: 'steward', ...at }])).id);
  const approver = await server.signedInAs((await buildPerson(database, [{ role: 'operations', ...at }])).id);
  const model = await fitModel(server, built, 32);
  const plan = await operations.send('put', `/api/sites/${built.site.id}/staffed-beds`, flatPlan(built.areas, [9, 4]));
  expect(plan.status, plan.text).toBe(200);
  const approval = `/api/sites/${built.site.id}/arrival-models/${model.id}/approval`;
  expect((await approver.send('post', approval, { reason: 'Agrees with the floor' })).status).toBe(200);
  await server.issuer.settle();
}, 120_000);
afterAll(() => server.close());

describe('before anything is scored', () => {
  test('the record says so, and counts the outlook that waits', async () => {
    const reply = await record();
    expect(reply.summary.n).toBe(0);
    expect(reply.verdict.headline).toBe('No needs 4 h ahead are scored yet');
    expect(reply.outlooks).toMatchObject({ issued: 1, scored: 0, withoutLaws: 0 });
    expect(reply.drift).toMatchObject({ weeks: 0, foundAt: null, findings: [] });
  });
});

describe('past weeks recomputed', () => {
  test('are issued by the product from what was known then, and scored', async () => {
    const asked = await steward.send('post', path('/recomputation'), { weeks: 4 });
    expect(asked.status, asked.text).toBe(202);
    const again = await steward.send('post', path('/recomputation'), { weeks: 4 });
    expect(again.status).toBe(409);
    // Stopped in the middle, it goes on after a restart and issues nothing twice.
    const working = server.workJobs();
    const recomputed = { siteId: built.site.id, trigger: 'recomputed' };
    const { read } = server.deps.database;
    await expect.poll(() => read.countBy(OutlookRow, recomputed), { timeout: 200_000 }).toBeGreaterThan(22);
    await server.deps.jobs.stop();
    await server.restartJobs();
    await working;
    const issued = await read.find(OutlookRow, { where: recomputed, select: { id: true, issuedAt: true } });
    expect(new Set(issued.map(({ issuedAt }) => issuedAt)).size).toBe(issued.length);
    const reply = await record();
    const { outlooks, summary } = reply;
    expect(outlooks.recomputed).toBeGreaterThanOrEqual(3 * 7 * 3);
    expect(outlooks.scored + outlooks.waiting + outlooks.withdrawn + outlooks.notRecorded + outlooks.overtaken).toBe(
      outlooks.issued,
    );
    expect(outlooks.scored).toBeGreaterThan(50);
    expect(outlooks.replicationsRecomputed).toBe(500);
    expect(summary.n).toBeGreaterThan(50);
    expect(summary.coverage[2].observed).toBeGreaterThan(0.7);
    expect(summary.coverage[2].expected).toBeGreaterThan(0.9);
    expect(summary.pit.reduce((sum, height) => sum + height, 0)).toBeCloseTo(10, 6);
    // Chance alone leaves most of the error: the demo's generator is Poisson given its rates.
    expect(summary.floorMase).toBeGreaterThan(0.3 * (summary.mase ?? 0));
    expect(reply.points[0]).toMatchObject({ recomputed: true, acknowledged: false });
    expect(reply.parts.area.map(({ name }) => name)).toEqual(['Acute', 'Resuscitation', 'Whole department']);
    expect(reply.parts.lead.map(({ key }) => key)).toEqual(['1', '4', '8', '12', '24', '48', '72']);
    expect(reply.byWeek.reduce((sum, { n }) => sum + n, 0)).toBe(summary.n);
  }, 400_000);

  test('and each can be computed again to the same digit', async () => {
    const { points } = await record();
    const repeat = `/api/sites/${built.site.id}/outlooks/${points[0].outlookId ?? ''}/repeat`;
    expect((await operations.send('post', repeat, {})).body).toMatchObject({ sameDigits: true });
  });

  test('a score is that of the log: present at the hour, and of the shift before which it was issued', async () => {
    const { database } = server.deps;
    const score = await database.read.findOneOrFail(ForecastScore, {
      where: { siteId: built.site.id, measure: 'need', leadHours: 12, areaId: built.areas[0].id },
      order: { id: 'DESC' },
    });
    const [{ n }] = await database.read.query<{ n: number }[]>(
      `SELECT count(*) AS n FROM visit WHERE areaCode = 0 AND arrivalAt <= ? AND arrivalAt > ? AND (departureAt > ? OR departureAt IS NULL)`,
      [score.fromAt, score.fromAt - 72 * 3600, score.fromAt],
    );
    expect(score.observed).toBe(n);
    const outlook = await database.read.findOneByOrFail(OutlookRow, { id: score.outlookId ?? '' });
    expect(score.fromAt - outlook.issuedAt).toBe(12 * 3600);
    const peaks = await database.read.findBy(ForecastScore, {
      measure: 'peak',
      leadHours: 0,
      areaId: built.areas[0].id,
    });
    const perShift = new Set(peaks.map(({ fromAt, shift }) => `${String(fromAt)} ${shift}`));
    expect(perShift.size).toBe(peaks.length);
    for (const peak of peaks) {
      const before = await database.read.findOneByOrFail(OutlookRow, { id: peak.outlookId ?? '' });
      expect(peak.fromAt - before.issuedAt).toBe(3600);
    }
  });

  test.each([
    ['?measure=peak', 'highest needs of a shift'],
    ['?measure=arrivals', 'daily arrivals'],
  ])('shifts and days are scored as well: %s', async (query, words) => {
    const reply = await record(query);
    expect(reply.summary.n).toBeGreaterThan(10);
    expect(JSON.stringify(reply.verdict) + reply.verdict.headline).toContain(
      reply.summary.n < 30 ? words : reply.verdict.headline,
    );
  });

  test('what the week ahead said is scored by how far ahead it lay, and opens as it was shown', async () => {
    const { database } = server.deps;
    const siteId = built.site.id;
    const { read } = database;
    const issued = await read.find(WeekOutlookRow, { where: { siteId, trigger: 'recomputed' } });
    expect(issued.length).toBeGreaterThanOrEqual(21);
    expect(new Set(issued.map(({ issuedAt }) => issuedAt)).size).toBe(issued.length);
    const all = await record();
    const { weekOutlooks } = all;
    expect(weekOutlooks.recomputed).toBe(issued.length);
    const { scored, waiting, withdrawn, notRecorded, overtaken, withoutLaws } = weekOutlooks;
    expect(scored + waiting + withdrawn + notRecorded + overtaken + withoutLaws).toBe(weekOutlooks.issued);
    expect(scored).toBeGreaterThanOrEqual(10);
    for (const [measure, leads] of [
      ['peak', [0, 24, 48, 72]],
      ['arrivals', [0, 24, 48, 72, 96, 120, 144, 168]],
      ['shift%20arrivals', [24, 48, 72]],
    ] as const) {
      const reply = await record(`?measure=${measure}&lead=72`);
      expect(reply.leads, measure).toEqual(leads);
      expect(reply.filter.lead).toBe(72);
      expect(reply.summary.n, measure).toBeGreaterThan(10);
      expect(reply.points[0]).toMatchObject({ outlookId: null, recomputed: true });
      const row = await read.findOneByOrFail(WeekOutlookRow, { id: reply.points[0].weekOutlookId ?? '' });
      const ahead = reply.points[0].from - row.issuedAt;
      expect(ahead, measure).toBeLessThanOrEqual(72 * 3600);
      expect(ahead, measure).toBeGreaterThan((measure === 'arrivals' ? 60 : 48) * 3600);
      const then = await operations.get(`/api/sites/${siteId}/week-outlooks/${row.id}`);
      expect(then.body).toMatchObject({ issuedAt: row.issuedAt, trigger: 'recomputed' });
      // The three shifts before it stand on the board to the left of then, with what the log tells of them.
      const { past } = then.body as WeekAhead;
      expect(past).toHaveLength(3);
      for (const shift of past) {
        expect(shift.to).toBeLessThanOrEqual(row.issuedAt + 9 * 3600);
        expect(shift.most).not.toBeNull();
      }
    }
    // Where a measure has nothing at the lead asked for, the nearest to the event is shown.
    expect((await record('?measure=shift%20arrivals')).filter.lead).toBe(24);
    // A shift's arrivals are those of the log, counted by hand.
    const score = await read.findOneByOrFail(ForecastScore, {
      siteId,
      measure: 'shift arrivals',
      leadHours: 48,
      areaId: built.areas[0].id,
    });
    const [{ n }] = await read.query<{ n: number }[]>(
      'SELECT count(*) AS n FROM visit WHERE areaCode = 0 AND arrivalAt >= ? AND arrivalAt < ?',
      [score.fromAt, score.toAt],
    );
    expect(score.observed).toBe(n);
    // Daily arrivals of the same day by tonight's and by the week's outlook are scored against the same count.
    const days = await read.findBy(ForecastScore, { siteId, measure: 'arrivals', areaId: '', fromAt: score.fromAt });
    expect(new Set(days.map(({ observed }) => observed)).size).toBeLessThanOrEqual(1);
  });

  test('the CSV holds the cautions and every score of the filter', async () => {
    const { summary } = await record();
    const reply = await operations.get(path('.csv'));
    const lines = reply.text.trimEnd().split('\r\n');
    expect(lines[0]).toMatch(/^# Planning aid\. Not for decisions about any individual patient/);
    expect(lines.filter((line) => !line.startsWith('#')).length).toBe(summary.n + 1);
  });

  test('a filter that is not one is refused', async () => {
    const reply = await operations.get(path('?weeks=12&measure=mood'));
    expect(reply.status).toBe(400);
    expect((reply.body as { faults: object[] }).faults.length).toBe(2);
  });
});

describe('a withdrawn log', () => {
  test('un-scores what it told, and says so; loaded again, it is scored again', async () => {
    const { database } = server.deps;
    const before = (await record()).outlooks;
    const log = await database.read.findOneByOrFail(VisitLog, { siteId: built.site.id, status: 'ready' });
    const withdrawal = `/api/sites/${built.site.id}/visit-logs/${log.id}/withdrawal`;
    expect((await steward.send('post', withdrawal, { reason: 'Wrong extract' })).status).toBe(200);
    await server.workJobs();
    const after = await record();
    expect(after.summary.n).toBe(0);
    expect(after.outlooks.scored).toBe(0);
    expect(after.outlooks.withdrawn).toBeGreaterThanOrEqual(before.scored);
    expect(after.weekOutlooks.scored).toBe(0);
    expect(after.weekOutlooks.withdrawn).toBeGreaterThanOrEqual(10);
    expect(await database.read.countBy(ForecastScore, { siteId: built.site.id })).toBe(0);
    const [{ n }] = await database.read.query<{ n: number }[]>(
      `SELECT count(*) AS n FROM audit_event WHERE event = 'track-record.unscored'`,
    );
    expect(n).toBe(1);
    // The outlooks themselves stand.
    expect(await database.read.countBy(OutlookLawsRow, { siteId: built.site.id })).toBe(after.outlooks.issued);
  }, 240_000);
});

test('a year can be asked for only where half a year of log lies before it', async () => {
  const { database } = server.deps;
  const other = await buildSite(database);
  const person = await buildPerson(database, [{ role: 'steward', siteId: other.site.id }]);
  const client = await server.signedInAs(person.id);
  const reply = await client.send('post', `/api/sites/${other.site.id}/track-record/recomputation`, { weeks: 52 });
  expect(reply.status).toBe(409);
  expect(reply.text).toContain('no accepted visit log');
  expect(now % day).toBeGreaterThan(0);
});
