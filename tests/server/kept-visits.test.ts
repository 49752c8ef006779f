import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { VisitLogSummary } from '../../shared/api/visit-logs.ts';
import type { VisitRetention } from '../../shared/api/visit-retention.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { newId } from '../../server/database/new-id.ts';
import { readSiteVisits } from '../../server/database/read-visits.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Census } from '../../server/entities/Census.ts';
import { CensusArea } from '../../server/entities/CensusArea.ts';
import { Job } from '../../server/entities/Job.ts';
import { Site } from '../../server/entities/Site.ts';
import { Visit } from '../../server/entities/Visit.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { askForPurge, keptFrom } from '../../server/features/visit-logs/purge-visits.job.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
const hour = 3600;
/** 2026-09-21T14:13:20Z, a Monday; London is an hour ahead of UTC. */
const now = 1_790_000_000;
const midnight = now - (now % day) - hour;

let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = now;
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }], 'Sam Steward');
  steward = await server.signedInAs(person.id);
  path = `/api/sites/${built.site.id}`;
});

/** A ready log of one visit an hour, each of two hours, half of them in each area. */
async function giveLog(from: number, to: number, more: Partial<VisitLog> = {}): Promise<VisitLog> {
  return server.deps.database.write(async (manager) => {
    const id = newId();
    const number = (await manager.countBy(VisitLog, {})) + 1;
    const rows = (to - from) / hour;
    await manager.insert(VisitLog, {
      id,
      number,
      siteId: built.site.id,
      status: 'ready',
      fileName: 'made.csv',
      sha256: id,
      rows,
      periodFrom: from,
      periodTo: to,
      statedFrom: null,
      selectedBy: 'arrived',
      takenAt: Math.min(to, now),
      missingDeparture: 'still present',
      problems: { rows: 0, kinds: [] },
      visitsByArea: [{ areaCode: 0, visits: rows }],
      uploadedBy: 'Sam Steward',
      uploadedAt: now,
      readyAt: now,
      ...more,
    });
    for (let start = 0; start < rows; start += 500) {
      const visits = Array.from({ length: Math.min(500, rows - start) }, (_, index) => {
        const rowNumber = start + index + 1;
        const arrivalAt = from + (rowNumber - 1) * hour;
        return { logNumber: number, rowNumber, areaCode: rowNumber % 2, arrivalAt, departureAt: arrivalAt + 2 * hour };
      });
      await manager.insert(Visit, visits);
    }
    return manager.findOneByOrFail(VisitLog, { id });
  });
}

const readLog = (id: string) => server.deps.database.read.findOneByOrFail(VisitLog, { id });
const visitsOf = (log: VisitLog) => server.deps.database.read.countBy(Visit, { logNumber: log.number });
const readSite = () => server.deps.database.read.findOneByOrFail(Site, { id: built.site.id });
const setDays = (days: number) => steward.send('put', `${path}/visit-retention`, { days });

describe('retention', () => {
  test('three years unless the site says otherwise', async () => {
    const reply = (await steward.get(`${path}/visit-retention`)).body as VisitRetention;
    expect(reply).toEqual({ days: 1095, keptFrom: midnight - 1095 * day, oldest: null });
  });

  test('a shorter time deletes what is older, in batches, with a trace; the rest counts as before', async () => {
    const old = await giveLog(midnight - 400 * day, midnight - 200 * day);
    const across = await giveLog(midnight - 200 * day, midnight - 10 * day);
    const other = await buildSite(server.deps.database);
    const elsewhere = await giveLog(midnight - 400 * day, midnight - 390 * day, { siteId: other.site.id });

    const reply = await setDays(100);
    expect(reply.status, reply.text).toBe(200);
    const cutoff = midnight - 100 * day;
    expect(reply.body).toEqual({ days: 100, keptFrom: cutoff, oldest: cutoff });
    // They stop counting with the write, before the first row is deleted.
    expect(readSiteVisits(server.deps.database.file, built.site.id).table.length).toBe(90 * 24);
    await server.workJobs();

    expect(await visitsOf(old)).toBe(0);
    expect(await visitsOf(across)).toBe(90 * 24);
    expect(await visitsOf(elsewhere)).toBe(240);
    const { table, lineage } = readSiteVisits(server.deps.database.file, built.site.id);
    expect(Math.min(...table.arrivalAt)).toBe(cutoff);
    // No hour before it is taken for one without arrivals.
    expect(lineage).toMatchObject([{ logId: across.id, periodFrom: cutoff, periodTo: midnight - 10 * day }]);
    expect(await readLog(old.id)).toMatchObject({ status: 'purged', statedFrom: midnight - 400 * day });

    const { logs } = (await steward.get(`${path}/visit-logs`)).body as { logs: VisitLogSummary[] };
    expect(logs.map(({ id, status, period, purgedTo, counts }) => ({ id, status, period, purgedTo, counts }))).toEqual([
      {
        id: across.id,
        status: 'ready',
        period: { from: midnight - 200 * day, to: midnight - 10 * day },
        purgedTo: cutoff,
        counts: [{ from: cutoff, to: midnight - 10 * day }],
      },
      {
        id: old.id,
        status: 'purged',
        period: { from: midnight - 400 * day, to: midnight - 200 * day },
        purgedTo: midnight - 200 * day,
        counts: [],
      },
    ]);
    const events = await server.deps.database.read.find(AuditEvent, {
      where: { siteId: built.site.id },
      order: { id: 'ASC' },
    });
    expect(events.map(({ event, actor, detail }) => [event, actor, JSON.parse(detail) as object])).toMatchObject([
      ['visit-retention.changed', 'Sam Steward', { from: 1095, to: 100 }],
      ['visits.purged', 'the retention rule', { days: 100, keptFrom: cutoff, logs: 2 }],
    ]);
  });

  test('asked again it does nothing, until the next day begins at the site', async () => {
    await giveLog(midnight - 1100 * day, midnight - 1090 * day);
    const purge = async () => askForPurge(server.deps, await readSite());
    expect(await purge()).toEqual(expect.any(String));
    expect(await purge()).toBeNull();
    server.time.now = midnight + day - 1;
    expect(await purge()).toBeNull();
    server.time.now = midnight + day;
    expect(await purge()).toEqual(expect.any(String));
    await server.workJobs();
    expect(await server.deps.database.read.countBy(Job, { siteId: built.site.id, status: 'done' })).toBe(2);
    const [log] = await server.deps.database.read.findBy(VisitLog, { siteId: built.site.id });
    expect(await visitsOf(log)).toBe(4 * 24);
  });

  test('a log that a newer one replaced is purged with it', async () => {
    const under = await giveLog(midnight - 1200 * day, midnight - 1100 * day);
    await giveLog(midnight - 1200 * day, midnight - 1000 * day);
    await askForPurge(server.deps, await readSite());
    await server.workJobs();
    expect(await visitsOf(under)).toBe(0);
    expect((await readLog(under.id)).status).toBe('purged');
  });

  // Lord Howe Island moves its clocks by half an hour; America/Sao_Paulo once skipped midnight itself (IANA time zone data).
  test.each([
    ['Europe/London', '2026-12-01T00:30:00Z', 245, '2026-03-30T23:00:00Z'],
    ['Australia/Lord_Howe', '2026-12-01T00:30:00Z', 60, '2026-10-01T13:30:00Z'],
    ['America/Sao_Paulo', '2019-01-03T12:00:00Z', 60, '2018-11-04T03:00:00Z'],
  ])('days are the site’s own: %s', (timeZone, at, visitRetentionDays, expected) => {
    const from = keptFrom({ timeZone, visitRetentionDays }, Date.parse(at) / 1000);
    expect(new Date(from * 1000).toISOString()).toBe(expected.replace('Z', '.000Z'));
    expect(makeZone(timeZone).fromLocal(makeZone(timeZone).toLocal(from))).toContain(from);
  });

  test.each([
    [59, 'At least 60 days'],
    [3654, 'At most 3,653 days'],
    [99.5, 'Whole days'],
  ])('%d days are refused', async (days, message) => {
    const reply = await setDays(days);
    expect(reply.status).toBe(400);
    expect(reply.body).toMatchObject({ faults: [{ at: 'days', message }] });
    expect((await readSite()).visitRetentionDays).toBe(1095);
  });
});

describe('present by the log against the censuses', () => {
  async function count(takenAt: number, presents: (number | null)[], savedAt = takenAt) {
    await server.deps.database.write(async (manager) => {
      const id = newId();
      await manager.insert(Census, { id, siteId: built.site.id, takenAt, savedAt, enteredBy: 'Nia Nurse' });
      for (const [index, present] of presents.entries()) {
        if (present === null) continue;
        const area = {
          censusId: id,
          areaId: built.areas[index].id,
          takenAt,
          savedAt,
          present,
          waiting: 0,
          boarding: 0,
        };
        await manager.insert(CensusArea, area);
      }
    });
  }

  test('pairs every count with the log’s, newest first, and only where the log can speak', async () => {
    const log = await giveLog(midnight - 20 * day, midnight - day);
    const at = midnight - 5 * day + 12 * hour + 600;
    await count(at, [3, 1]);
    await count(at, [2, null], at + 60);
    await count(at + day, [null, 0]);
    // Before the longest stay has passed since the log's start, after its end, and where nothing was counted.
    await count(midnight - 19 * day, [9, 9]);
    await count(midnight - hour, [9, 9]);
    const reply = await steward.get(`${path}/visit-logs/${log.id}/presence`);
    // Visits begin on the hour and last two: two are present, one in each area.
    expect(reply.body).toEqual({
      compared: [
        { takenAt: at + day, areaId: built.areas[1].id, name: 'Resuscitation', counted: 0, inLog: 1 },
        { takenAt: at, areaId: built.areas[0].id, name: 'Acute', counted: 2, inLog: 1 },
        { takenAt: at, areaId: built.areas[1].id, name: 'Resuscitation', counted: 1, inLog: 1 },
      ],
    });
  });

  test('is empty for a log that a newer one replaced, and 404 for another site’s', async () => {
    const log = await giveLog(midnight - 20 * day, midnight - day);
    await giveLog(midnight - 20 * day, midnight - day);
    await count(midnight - 5 * day, [1, 1]);
    expect((await steward.get(`${path}/visit-logs/${log.id}/presence`)).body).toEqual({ compared: [] });
    const other = await buildSite(server.deps.database);
    const theirs = await giveLog(midnight - 20 * day, midnight - day, { siteId: other.site.id });
    expect((await steward.get(`${path}/visit-logs/${theirs.id}/presence`)).status).toBe(404);
  });
});
