import { afterAll, afterEach, beforeAll, beforeEach, expect, test, vi } from 'vitest';
import type { Site } from '../../server/entities/Site.ts';
import { startTimetable } from '../../server/jobs/timetable.ts';
import { giveOutlook } from '../support/build-model.ts';
import { buildSite } from '../support/build-site.ts';
import { openTestServer, type TestServer } from '../support/test-server.ts';

/** A full hour. */
const hourStart = Date.parse('2026-09-21T14:00:00Z') / 1000;
let server: TestServer;
let site: Site;
let timetable: { stop(): Promise<void> } | null = null;

beforeAll(async () => {
  server = await openTestServer({ now: hourStart });
  site = (await buildSite(server.deps.database)).site;
});
afterAll(() => server.close());
beforeEach(() => {
  vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval'] });
});
afterEach(async () => {
  await timetable?.stop();
  vi.useRealTimers();
  vi.restoreAllMocks();
});

function start() {
  const issue = vi
    .spyOn(server.issuer, 'issue')
    .mockImplementation(() => Promise.resolve({ outlookId: null, reason: 'no model' }));
  const sweep = vi.spyOn(server.sessions, 'sweep');
  timetable = startTimetable(server.deps, server.issuer, server.sessions);
  return { issue, sweep };
}

/** Lets the timetable look once, and waits until it has. */
async function look() {
  await vi.advanceTimersByTimeAsync(20_000);
  // It looks with reads of the database, which no fake timer moves on.
  for (let i = 0; i < 20; i += 1) await new Promise((resolve) => setTimeout(resolve, 2));
}

test('issues an outlook where none was issued in this hour, once an hour', async () => {
  server.time.now = hourStart + 1800;
  const { issue } = start();
  await look();
  expect(issue.mock.calls).toEqual([[site.id, 'timetable']]);
  issue.mockClear();
  await giveOutlook(server.deps.database, site, hourStart + 1);
  await look();
  expect(issue).not.toHaveBeenCalled();
  server.time.now = hourStart + 3599;
  await look();
  expect(issue).not.toHaveBeenCalled();
  server.time.now = hourStart + 3600;
  await look();
  expect(issue).toHaveBeenCalledOnce();
});

test('after a long pause catches up once', async () => {
  server.time.now = hourStart + 30 * 3600;
  const { issue } = start();
  await look();
  expect(issue).toHaveBeenCalledOnce();
});

test('sweeps ended sessions once an hour', async () => {
  const { sweep } = start();
  await look();
  await look();
  expect(sweep).toHaveBeenCalledOnce();
  server.time.now += 3601;
  await look();
  expect(sweep).toHaveBeenCalledTimes(2);
});

test('a failure is reported and the next look goes on', async () => {
  const log = vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
  server.time.now += 7200;
  const { issue } = start();
  issue.mockRejectedValueOnce(new Error('threads gone'));
  await look();
  expect(log).toHaveBeenCalledOnce();
  await look();
  expect(issue).toHaveBeenCalledTimes(2);
});

test('a site whose outlook fails does not keep the others from theirs', async () => {
  vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
  server.time.now += 7200;
  const second = (await buildSite(server.deps.database)).site;
  const { issue } = start();
  issue.mockRejectedValueOnce(new Error('threads gone'));
  await look();
  expect(issue.mock.calls.map(([id]) => id).sort()).toEqual([site.id, second.id].sort());
});

test('looks no more once stopped', async () => {
  server.time.now += 7200;
  const { issue } = start();
  await timetable?.stop();
  await look();
  expect(issue).not.toHaveBeenCalled();
});
