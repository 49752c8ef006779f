import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import { Job } from '../../server/entities/Job.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import type { Site } from '../../server/entities/Site.ts';
import { askForBackup, backupJobKind } from '../../server/features/server-status/make-backup.job.ts';
import { lastDailyTime } from '../../server/features/week-ahead/week-outlook-due.ts';
import { SessionStore } from '../../server/http/session-store.ts';
import { startTimetable } from '../../server/jobs/timetable.ts';
import { giveOutlook } from '../support/build-model.ts';
import { buildPerson, buildSite } from '../support/build-site.ts';
import { openTestServer, type TestServer } from '../support/test-server.ts';

/*
 * Clocks that jump. Summer time moves no clock of the server, which counts UTC seconds: what is due by local time must still
 * happen once. A server's own clock that is set back must not stop what is due until it has caught up.
 */
let server: TestServer;
let site: Site;
let timetable: { stop(): Promise<void> } | null = null;
const at = (text: string) => Date.parse(text) / 1000;

beforeAll(async () => {
  server = await openTestServer({ now: at('2026-10-24T23:00:00Z'), config: { backupEveryHours: 24, backupKeep: 9 } });
  site = (await buildSite(server.deps.database, { timeZone: 'Europe/London' })).site;
});
afterAll(() => server.close());
beforeEach(() => {
  vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval'] });
});
afterEach(async () => {
  await timetable?.stop();
  timetable = null;
  vi.useRealTimers();
  vi.restoreAllMocks();
});

/** Starts the timetable; every outlook that it asks for is stored as issued then. */
function start(): number[] {
  const issued: number[] = [];
  vi.spyOn(server.issuer, 'issue').mockImplementation(async (_, trigger) => {
    issued.push(server.time.now);
    if (trigger === 'timetable') await giveOutlook(server.deps.database, site, server.time.now);
    return { outlookId: null, reason: 'no model' };
  });
  timetable = startTimetable(server.deps, server.issuer, server.sessions);
  return issued;
}
async function look(): Promise<void> {
  await vi.advanceTimersByTimeAsync(20_000);
  for (let i = 0; i < 15; i += 1) await new Promise((resolve) => setTimeout(resolve, 2));
}

describe('over a change to winter time and one to summer time', () => {
  // Last Sundays of October and March: EU directive 2000/84/EC, as the United Kingdom keeps it.
  test.each([
    ['winter', '2026-10-24T23:00:00Z'],
    ['summer', '2027-03-27T23:00:00Z'],
  ])('to %s: one outlook an hour, none twice and none left out', async (_, from) => {
    server.time.now = at(from);
    const issued = start();
    for (let quarter = 0; quarter < 16; quarter += 1) {
      await look();
      server.time.now += 900;
    }
    expect(issued).toEqual([0, 1, 2, 3].map((hour) => at(from) + hour * 3600));
  });

  test.each([
    ['winter', '2026-10-24T00:00:00Z', 25],
    ['summer', '2027-03-27T00:00:00Z', 23],
  ])('to %s: the daily time comes once a day', (_, from, hours) => {
    const times = new Set<number>();
    for (let quarter = 0; quarter < 72 * 4; quarter += 1)
      times.add(lastDailyTime(site.timeZone, at(from) + quarter * 900));
    const sorted = [...times].toSorted((a, b) => a - b);
    // The day before, three days; the night of the change is an hour longer or shorter.
    expect(sorted).toHaveLength(4);
    expect((sorted[2] - sorted[1]) / 3600).toBe(hours);
  });
});

describe('a server’s clock that is set back', () => {
  test('by a day: the hour still has its outlook, once', async () => {
    server.time.now = at('2027-05-10T12:10:00Z');
    const issued = start();
    await look();
    server.time.now = at('2027-05-09T12:10:00Z');
    await look();
    await look();
    expect(issued).toEqual([at('2027-05-10T12:10:00Z'), at('2027-05-09T12:10:00Z')]);
  });

  test('by a month: a backup is still made, once', async () => {
    const backups = () => server.deps.database.read.countBy(Job, { kind: backupJobKind });
    server.time.now = at('2027-07-01T12:00:00Z');
    await askForBackup(server.deps);
    await server.workJobs();
    const before = await backups();
    server.time.now = at('2027-06-01T12:00:00Z');
    await askForBackup(server.deps);
    await server.workJobs();
    await askForBackup(server.deps);
    expect(await backups()).toBe(before + 1);
  });

  test('by a day: a job that was asked for before runs at once, rather than a day later', async () => {
    server.time.now = at('2027-06-05T12:00:00Z');
    const { jobs, database } = server.deps;
    await jobs.stop();
    const id = await database.write((manager) =>
      jobs.enqueue(manager, { kind: 'unheard of', title: 'x', siteId: null, payload: null, createdBy: 'Test' }),
    );
    server.time.now = at('2027-06-04T12:00:00Z');
    await server.restartJobs();
    await vi.advanceTimersByTimeAsync(1000);
    await expect.poll(async () => (await database.read.findOneByOrFail(Job, { id })).status).toBe('failed');
  });

  test('by an hour: a lease from before keeps no job of a dead process from running', async () => {
    const { jobs, database } = server.deps;
    await jobs.stop();
    const id = await database.write((manager) =>
      jobs.enqueue(manager, { kind: 'unheard of', title: 'x', siteId: null, payload: null, createdBy: 'Test' }),
    );
    const left = { status: 'running' as const, attempts: 1, leaseUntil: server.time.now + 86_400 };
    await database.write((manager) => manager.update(Job, { id }, left));
    server.time.now -= 3600;
    await server.restartJobs();
    await vi.advanceTimersByTimeAsync(1000);
    await expect.poll(async () => (await database.read.findOneByOrFail(Job, { id })).status).toBe('failed');
  });

  test('a session does not outlive its twelve hours by it; a correction of seconds ends nobody’s', async () => {
    let now = at('2027-06-02T12:00:00Z');
    const store = new SessionStore(server.deps.database, () => now, 12 * 3600);
    const read = () =>
      new Promise((resolve) => {
        store.get('jumped', (_, found) => {
          resolve(found);
        });
      });
    const data = { personId: (await buildPerson(server.deps.database)).id, signedInAt: now, usedAt: now, cookie: {} };
    await new Promise((resolve) => {
      store.set('jumped', data as Parameters<SessionStore['set']>[1], resolve);
    });
    now -= 30;
    expect(await read()).not.toBeNull();
    now -= 86_400;
    expect(await read()).toBeNull();
  });

  test('a screen left alone still locks after its fifteen minutes', async () => {
    const { database } = server.deps;
    const client = await server.signedInAs((await buildPerson(database)).id);
    const sid = /s%3A(\w+)/.exec(client.cookie)?.[1] ?? '';
    const row = () => database.read.findOneByOrFail(SessionRow, { sid });
    const data = { ...(JSON.parse((await row()).data) as object), usedAt: server.sessions.now() + 86_400 };
    await database.write((manager) => manager.update(SessionRow, { sid }, { data: JSON.stringify(data) }));
    expect((await client.get('/api/session')).status).toBe(200);
    const { usedAt } = JSON.parse((await row()).data) as { usedAt: number };
    expect(usedAt).toBeLessThanOrEqual(server.sessions.now());
  });
});
