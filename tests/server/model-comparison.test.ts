import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { ModelComparisonReply } from '../../shared/api/arrival-models.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { ModelComparisonRow } from '../../server/entities/ModelComparisonRow.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
const start = Date.parse('2026-09-21T14:13:20Z') / 1000;
const later = start + 21 * day;

let server: TestServer;
let built: BuiltSite;
let inUse: ArrivalModelRow;
let candidateId: string;
let steward: SignedIn;
let operations: SignedIn;
const models = () => `/api/sites/${built.site.id}/arrival-models`;
const comparisonOf = async (id: string) =>
  (await operations.get(`${models()}/${id}/comparison`)).body as {
    comparison: ModelComparisonReply | null;
    mayCompare: boolean;
  };

async function fitCandidate(): Promise<string> {
  const asked = await steward.send('post', models(), {});
  expect(asked.status, asked.text).toBe(202);
  await server.workJobs();
  return (asked.body as { modelId: string }).modelId;
}

beforeAll(async () => {
  server = await openTestServer({ now: start });
  const { database } = server.deps;
  built = await buildSite(database);
  const at = { siteId: built.site.id };
  steward = await server.signedInAs((await buildPerson(database, [{ role: 'steward', ...at }], 'Sam Steward')).id);
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', ...at }], 'Ola')).id);
  inUse = await fitModel(server, built, 12);
  const approved = await operations.send('post', `${models()}/${inUse.id}/approval`, {
    reason: 'As the floor knows it',
  });
  expect(approved.status, approved.text).toBe(200);
  // Three weeks later a log of all weeks lands, and a candidate is fitted on it.
  server.time.now = later;
  const from = inUse.trainedFrom ?? 0;
  const period = { periodFrom: from, periodTo: later - (later % day) + day - 3600, takenAt: later };
  await buildVisitLog(database, built, inventVisits(built, from, later), period);
  candidateId = await fitCandidate();
}, 120_000);
afterAll(() => server.close());

describe('a candidate beside the model in use', () => {
  test('is not compared by itself, and the page can say so', async () => {
    expect(await comparisonOf(candidateId)).toEqual({ comparison: null, mayCompare: true });
    expect(await comparisonOf(inUse.id)).toEqual({ comparison: null, mayCompare: false });
    const refused = await operations.send('post', `${models()}/${inUse.id}/comparison`, {});
    expect(refused.status).toBe(409);
    expect(refused.text).toContain('Only a candidate');
  });

  test('a comparison that is cancelled says so and can be asked for again', async () => {
    const asked = await operations.send('post', `${models()}/${candidateId}/comparison`, { weeks: 3 });
    expect(asked.status, asked.text).toBe(202);
    expect((await operations.send('post', `${models()}/${candidateId}/comparison`, {})).status).toBe(409);
    const { jobId } = asked.body as { jobId: string };
    expect((await comparisonOf(candidateId)).mayCompare).toBe(false);
    const cancelled = await operations.send('post', `/api/sites/${built.site.id}/jobs/${jobId}/cancel`, {});
    expect(cancelled.status, cancelled.text).toBe(200);
    expect(await comparisonOf(candidateId)).toMatchObject({
      comparison: { status: 'failed', error: 'Cancelled.', result: null },
      mayCompare: true,
    });
  });

  test('is tried on the same weeks, each with what it would have known', async () => {
    const asked = await operations.send('post', `${models()}/${candidateId}/comparison`, { weeks: 2 });
    expect(asked.status, asked.text).toBe(202);
    await server.workJobs();
    const { comparison } = await comparisonOf(candidateId);
    expect(comparison?.error).toBeNull();
    expect(comparison).toMatchObject({ status: 'done', stillInUse: true, askedBy: 'Ola', inUse: { id: inUse.id } });
    const result = comparison!.result!;
    expect(result.weeks).toBe(2);
    // Other logs lie behind the two, so that no week is alike by construction.
    expect(result.weeksAlike).toBe(0);
    expect((result.to - result.from) / day).toBeCloseTo(14, 5);
    expect(result.to).toBeLessThanOrEqual(later);
    expect(result.arrivals.map(({ level, n }) => [level, n])).toEqual([
      ['hour', 336],
      ['shift', 42],
      ['day', 14],
      ['week', 2],
    ]);
    expect(result.need.map(({ leadHours }) => leadHours)).toEqual([1, 4, 8, 12, 24, 72]);
    for (const scale of [...result.arrivals, ...result.need]) {
      const { candidate, inUse: other, difference } = scale;
      expect(difference!.logScore.value).toBeCloseTo(candidate.logScore! - other.logScore!, 10);
      expect(difference!.pinball.value).toBeCloseTo(candidate.pinball! - other.pinball!, 10);
      expect(difference!.logScore.se).toBeGreaterThan(0);
      expect(difference!.logScore.monteCarlo).toBeGreaterThan(0);
      expect(candidate.coverage.map(({ level }) => level)).toEqual([0.5, 0.8, 0.9, 0.95]);
      expect(candidate.coverage[2].expected).toBeGreaterThan(0.9);
    }
    // The generator does not change: neither can be much better.
    expect(Math.abs(result.arrivals[0].difference!.logScore.value)).toBeLessThan(0.05);
    expect(result.arrivals[0].candidate.mase).toBeLessThan(1);
    expect(result.words.headline).toMatch(/candidate/i);
    expect(JSON.stringify(result.words)).not.toMatch(/NaN|undefined|null/);
    const events = await server.deps.database.read.findBy(AuditEvent, { subject: candidateId });
    expect(events.map(({ event }) => event)).toEqual(
      expect.arrayContaining(['arrival-model.compare-asked', 'arrival-model.compared']),
    );
  }, 120_000);

  test('and once another model is in use, the comparison says that it is out of date', async () => {
    const other = await giveModel(server.deps.database, inUse, built, { approvedAt: later + 1 });
    expect((await comparisonOf(candidateId)).comparison).toMatchObject({ status: 'done', stillInUse: false });
    // The copy was fitted before these weeks as well; against itself nothing can differ.
    const twin = await giveModel(server.deps.database, inUse, built, { status: 'candidate', approvedAt: null });
    const asked = await steward.send('post', `${models()}/${twin.id}/comparison`, { weeks: 1 });
    expect(asked.status, asked.text).toBe(202);
    await server.workJobs();
    const { result, inUse: against } = (await comparisonOf(twin.id)).comparison!;
    expect(against.id).toBe(other.id);
    for (const { difference } of [...result!.arrivals, ...result!.need]) expect(difference!.logScore.value).toBe(0);
    // One week cannot be resampled: its error is not known, and the words say no more.
    expect(result!.words.headline).toBe('Too few weeks to tell the two apart.');
    expect(await server.deps.database.read.countBy(ModelComparisonRow, { siteId: built.site.id })).toBe(3);
  }, 120_000);

  test('fitted on the same visits, no past week can tell the two apart, and the page says so', async () => {
    expect((await operations.send('post', `${models()}/${candidateId}/approval`, { reason: 'Newer' })).status).toBe(
      200,
    );
    const again = await fitCandidate();
    await operations.send('post', `${models()}/${again}/comparison`, { weeks: 1 });
    await server.workJobs();
    const { result } = (await comparisonOf(again)).comparison!;
    expect(result).toMatchObject({ weeks: 1, weeksAlike: 1 });
    expect(result!.words.headline).toBe('No past week tells the candidate from the model in use.');
  }, 120_000);
});
