import { Not } from 'typeorm';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { readModelInUse, readModelParameters } from '../../server/database/read-model.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { levelJob } from '../../server/features/arrival-models/level-job.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { fitModel } from '../support/build-model.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
/** 2026-09-21T14:13:20Z, a Monday. */
const now = 1_790_000_000;
const later = now + 10 * day;

let server: TestServer;
let built: BuiltSite;
let fitted: ArrivalModelRow;
let steward: SignedIn;

beforeAll(async () => {
  server = await openTestServer({ now });
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }], 'Sam Steward');
  fitted = await fitModel(server, built, 10);
  server.time.now = later;
  steward = await server.signedInAs(person.id);
});
afterAll(() => server.close());

/** The fitted model in use as on the day it was approved, and nothing loaded since. */
beforeEach(async () => {
  await server.deps.database.write(async (manager) => {
    await manager.delete(ArrivalModelRow, { siteId: built.site.id, id: Not(fitted.id) });
    await manager.query(`UPDATE visit_log SET status = 'withdrawn' WHERE siteId = ? AND periodFrom > ?`, [
      built.site.id,
      fitted.trainedTo ?? 0,
    ]);
    await manager.query('DELETE FROM exposure_gap WHERE siteId = ?', [built.site.id]);
    await manager.update(ArrivalModelRow, { id: fitted.id }, { status: 'in use', approvedAt: now, approvedBy: 'Ola' });
  });
});

async function refresh() {
  await server.deps.database.write((manager) => server.deps.jobs.enqueue(manager, levelJob(built.site.id)));
  return inUse();
}

async function inUse() {
  await server.workJobs();
  const model = await readModelInUse(server.deps.database.read, built.site.id);
  const { arrival } = await readModelParameters(server.deps.database.read, model!.id);
  return { id: model!.id, trainedTo: model!.trainedTo, arrival, level: arrival.site.mean[0] };
}

/** Ten more days, every visit as often as `times` says. */
function loadOn(times: number, from = now, to = later) {
  const visits = inventVisits(built, from, to).flatMap((visit) => Array.from({ length: times }, () => visit));
  return buildVisitLog(server.deps.database, built, visits, { periodFrom: from, periodTo: to, takenAt: later });
}

const withdraw = (logId: string) =>
  steward.send('post', `/api/sites/${built.site.id}/visit-logs/${logId}/withdrawal`, { reason: 'Rows were doubled' });

test('a withdrawn log leaves the level that it had moved, and the model ends where the data end', async () => {
  const before = await inUse();
  const bad = await loadOn(3);
  const moved = await refresh();
  expect(moved.id).not.toBe(before.id);
  expect(moved.level).toBeGreaterThan(before.level + 0.1);
  expect((await withdraw(bad.id)).status).toBe(200);
  const after = await inUse();
  expect(after.id).not.toBe(moved.id);
  expect(after.arrival).toEqual(before.arrival);
  expect(after.trainedTo).toBe(before.trainedTo);
});

test('with a good log beside it the level is what the good one alone leads to', async () => {
  const good = await loadOn(1, now, now + 4 * day);
  const right = await refresh();
  expect(good.status).toBe('ready');
  const bad = await loadOn(3, now + 4 * day, later);
  expect((await refresh()).level).toBeGreaterThan(right.level + 0.05);
  expect((await withdraw(bad.id)).status).toBe(200);
  const after = await inUse();
  expect(after.arrival).toEqual(right.arrival);
  expect(after.trainedTo).toBe(right.trainedTo);
});

test('hours declared as an outage leave the level; taken back, they move it again', async () => {
  // Of the last five days one visit in five was recorded.
  const visits = inventVisits(built, now, later).filter(
    ({ arrivalAt }, index) => arrivalAt < now + 5 * day || index % 5 === 0,
  );
  const period = { periodFrom: now, periodTo: later, takenAt: later };
  await buildVisitLog(server.deps.database, built, visits, period);
  const low = await refresh();
  const reply = await steward.send('post', `/api/sites/${built.site.id}/exposure-gaps`, {
    kind: 'outage',
    areaId: null,
    from: now + 5 * day,
    until: later,
    reason: 'Power cut in the server room',
  });
  expect(reply.status, reply.text).toBe(201);
  const mended = await inUse();
  expect(mended.level).toBeGreaterThan(low.level + 0.05);
  const { id } = reply.body as { id: string };
  expect((await steward.send('delete', `/api/sites/${built.site.id}/exposure-gaps/${id}`)).status).toBe(204);
  expect((await inUse()).arrival).toEqual(low.arrival);
});

test('a refresh that changes nothing makes no new row', async () => {
  await loadOn(1);
  const once = await refresh();
  expect((await refresh()).id).toBe(once.id);
});

test('where the visits since the fit were deleted after the retention time, the level goes on from where it was', async () => {
  await loadOn(1);
  const moved = await refresh();
  await server.deps.database.write((manager) =>
    manager.update('site', { id: built.site.id }, { visitRetentionDays: 5 }),
  );
  const again = await refresh();
  expect(again.id).toBe(moved.id);
  await server.deps.database.write((manager) =>
    manager.update('site', { id: built.site.id }, { visitRetentionDays: 1095 }),
  );
});
