import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { WeekAhead, WeekOutlook } from '../../shared/api/week-outlooks.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { issueWeekOutlook } from '../../shared/forecasting/week-outlook.ts';
import type { WeekOutlookInput } from '../../shared/forecasting/week-outlook-types.ts';
import { newId } from '../../server/database/new-id.ts';
import { readModelParameters } from '../../server/database/read-model.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { BedChange } from '../../server/entities/BedChange.ts';
import { CalendarEntry } from '../../server/entities/CalendarEntry.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { Job } from '../../server/entities/Job.ts';
import { Shift } from '../../server/entities/Shift.ts';
import { StaffedBedPlan } from '../../server/entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../../server/entities/StaffedBedPlanArea.ts';
import { WeekOutlookRow } from '../../server/entities/WeekOutlookRow.ts';
import { weekHours } from '../../server/features/week-ahead/build-week-input.ts';
import { countAmbulances } from '../../server/features/week-ahead/count-ambulances.ts';
import {
  askForWeekOutlook,
  makeWeekOutlookKind,
  weekOutlookJobKind,
} from '../../server/features/week-ahead/issue-week-outlook.job.ts';
import { lookBacksDue } from '../../server/features/week-ahead/look-backs-due.ts';
import { lastDailyTime, weekOutlookDue } from '../../server/features/week-ahead/week-outlook-due.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
/** Monday 21 September 2026, 15:20 in London. */
const start = Date.parse('2026-09-21T14:20:00Z') / 1000;
let server: TestServer;
let fitted: ArrivalModelRow;
let built: BuiltSite;
let operations: SignedIn;

beforeAll(async () => {
  server = await openTestServer({ now: start });
  built = await buildSite(server.deps.database);
  fitted = await fitModel(server, built, 10);
  await givePlan(built);
  operations = await server.signedInAs(
    (await buildPerson(server.deps.database, [{ role: 'operations', siteId: built.site.id }])).id,
  );
}, 180_000);
afterAll(() => server.close());

/** The first version of a plan with the same beds at all hours. */
async function givePlan({ site, areas }: BuiltSite): Promise<void> {
  const plan = {
    id: newId(),
    siteId: site.id,
    version: 1,
    savedAt: start - day,
    savedBy: 'Test',
    reason: 'As every week',
  };
  await server.deps.database.write(async (manager) => {
    await manager.insert(StaffedBedPlan, plan);
    const named = flatPlan(areas, [18, 4]).areas;
    await manager.insert(
      StaffedBedPlanArea,
      named.map((area) => ({ planId: plan.id, ...area })),
    );
  });
}

const latest = async (): Promise<WeekAhead> =>
  (await operations.get(`/api/sites/${built.site.id}/week-outlooks/latest`).expect(200)).body as WeekAhead;
const due = () => weekOutlookDue(server.deps.database.read, built.site, server.time.now);
const rows = () =>
  server.deps.database.read.find(WeekOutlookRow, { where: { siteId: built.site.id }, order: { issuedAt: 'ASC' } });

/** Issues through the job itself, with few replications. */
async function issue(): Promise<void> {
  const kind = makeWeekOutlookKind(server.deps, 200);
  await kind.run({
    job: new Job(),
    payload: { siteId: built.site.id },
    signal: new AbortController().signal,
    progress: () => undefined,
  });
}

describe('before the first', () => {
  it('says why there is none and what to do', async () => {
    const empty = await latest();
    expect(empty.outlook).toBeNull();
    expect(empty.missing?.reason).toBe('no model');
    expect(await due()).toBeNull();
    await giveModel(server.deps.database, fitted, built);
    expect((await latest()).missing?.reason).toBe('not computed yet');
    expect((await latest()).computing).toBe(true);
    expect(await due()).toBe('first');
  });

  it('a site without a plan is told to save one, and none is asked for', async () => {
    const other = await buildSite(server.deps.database);
    await giveModel(server.deps.database, fitted, other);
    const person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: other.site.id }]);
    const charge = await server.signedInAs(person.id);
    const body = (await charge.get(`/api/sites/${other.site.id}/week-outlooks/latest`).expect(200)).body as WeekAhead;
    expect(body.missing?.reason).toBe('no staffed-bed plan');
    expect(await askForWeekOutlook(server.deps, other.site)).toBe(false);
  });

  it('a model of under eight weeks gives none: Tonight reaches further than it may', async () => {
    const other = await buildSite(server.deps.database);
    const parameters = JSON.parse(fitted.parameters ?? '') as { arrival: { coarse: boolean } };
    parameters.arrival.coarse = true;
    await giveModel(server.deps.database, fitted, other, { parameters: JSON.stringify(parameters) });
    await givePlan(other);
    const person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: other.site.id }]);
    const charge = await server.signedInAs(person.id);
    const body = (await charge.get(`/api/sites/${other.site.id}/week-outlooks/latest`).expect(200)).body as WeekAhead;
    expect(body.missing?.reason).toBe('little history');
  });
});

describe('asking', () => {
  it('queues one job that people can see, and not a second while it waits', async () => {
    await server.deps.jobs.stop();
    expect(await askForWeekOutlook(server.deps, built.site)).toBe(true);
    expect(await askForWeekOutlook(server.deps, built.site)).toBe(false);
    const { body } = await operations.get(`/api/sites/${built.site.id}/jobs`).expect(200);
    const { jobs } = body as { jobs: { title: string; status: string }[] };
    expect(jobs.find(({ title }) => title === 'Compute the week ahead')?.status).toBe('queued');
    await server.deps.database.write((manager) => manager.delete(Job, { kind: weekOutlookJobKind }));
  });

  it('rests for an hour after a job that failed for good', async () => {
    await askForWeekOutlook(server.deps, built.site);
    await server.deps.database.write((manager) =>
      manager.update(Job, { kind: weekOutlookJobKind }, { status: 'failed', endedAt: server.time.now }),
    );
    expect(await askForWeekOutlook(server.deps, built.site)).toBe(false);
    server.time.now += 3601;
    expect(await askForWeekOutlook(server.deps, built.site)).toBe(true);
    server.time.now -= 3601;
    await server.deps.database.write((manager) => manager.delete(Job, { kind: weekOutlookJobKind }));
  });
});

describe('a week outlook', () => {
  beforeAll(issue, 120_000);

  it('is stored with all that it was computed from, and computed again gives the same digits', async () => {
    const [row] = await rows();
    expect(row).toMatchObject({ trigger: 'first', planVersion: 1, replications: 200, issuedAt: start });
    const whole = await server.deps.database.read
      .createQueryBuilder(WeekOutlookRow, 'week')
      .addSelect(['week.input', 'week.result'])
      .where('week.id = :id', { id: row.id })
      .getOneOrFail();
    const input = JSON.parse(whole.input) as WeekOutlookInput;
    expect(JSON.parse(row.calendar)).toEqual(input.calendar);
    const again = issueWeekOutlook(await readModelParameters(server.deps.database.read, row.modelId), input);
    expect(JSON.stringify(again)).toBe(whole.result);
  });

  it('is answered as it is stored, by newest, by list and by id; elsewhere it is not found', async () => {
    const { outlook, missing, plan, computing } = await latest();
    if (!outlook) throw new Error('no outlook');
    expect(missing).toBeNull();
    expect(computing).toBe(false);
    expect(plan?.version).toBe(1);
    expect(outlook.result.days).toHaveLength(15);
    expect(outlook.result.areas.map(({ areaId }) => areaId)).toEqual(built.areas.map(({ id }) => id));
    const path = `/api/sites/${built.site.id}/week-outlooks`;
    const list = await operations.get(`${path}?from=${String(start - 10)}&to=${String(start + 10)}`).expect(200);
    expect(list.body).toEqual({ outlooks: [{ id: outlook.id, issuedAt: start, trigger: 'first' }] });
    const byId = (await operations.get(`${path}/${outlook.id}`).expect(200)).body as WeekOutlook &
      Pick<WeekAhead, 'past'>;
    const { past, ...issued } = byId;
    expect(issued).toEqual(outlook);
    expect(past).toEqual((await latest()).past);
    await operations.get(`${path}/none`).expect(404);
    await operations.get(`${path}?from=${String(start)}&to=${String(start)}`).expect(400);
    await operations.get(`${path}?from=0&to=${String(101 * day)}`).expect(400);
    const other = await buildSite(server.deps.database);
    const person = await buildPerson(server.deps.database, [{ role: 'operations', siteId: other.site.id }]);
    const stranger = await server.signedInAs(person.id);
    await stranger.get(`${path}/${outlook.id}`).expect(404);
    await stranger.get(`/api/sites/${other.site.id}/week-outlooks/${outlook.id}`).expect(404);
  });

  it('begins without a census with a caution, and shows what came by the hour', async () => {
    const { cautions, actual, past, lastWeek } = await latest();
    expect(cautions.map(({ kind }) => kind)).toContain('without a census');
    expect(cautions.map(({ kind }) => kind)).toContain('winter not seen yet');
    expect(actual).toHaveLength(8 * 24);
    const known = actual.filter(({ count }) => count !== null);
    expect(known.length).toBeGreaterThan(7 * 24);
    const visits = await server.deps.database.read.query<{ n: number }[]>(
      'SELECT count(*) AS n FROM visit WHERE arrivalAt >= ? AND arrivalAt < ?',
      [known[0].from, known[known.length - 1].to],
    );
    expect(known.reduce((sum, { count }) => sum + (count ?? 0), 0)).toBe(visits[0].n);
    expect(past.map(({ name }) => name)).toEqual(['Late', 'Night', 'Early']);
    expect(past[0].areas[0].most).toBeGreaterThan(0);
    expect(lastWeek).toBeNull();
  });

  it('is due again when what it stands on changes, and not when only tonight’s beds do', async () => {
    const { database } = server.deps;
    expect(await due()).toBeNull();
    const change = {
      id: newId(),
      siteId: built.site.id,
      areaId: built.areas[0].id,
      fromAt: start + 3 * day,
      untilAt: start + 4 * day,
      beds: 12,
      blocked: 0,
      reason: 'Refurbishment',
      madeBy: 'Test',
      madeAt: start,
    };
    await database.write((manager) => manager.insert(BedChange, { ...change, kind: 'change now' as const }));
    expect(await due()).toBeNull();
    await database.write((manager) => manager.update(BedChange, { id: change.id }, { kind: 'dated exception' }));
    expect(await due()).toBe('what it stands on changed');
    await database.write((manager) => manager.delete(BedChange, { id: change.id }));
    expect(await due()).toBeNull();

    const entry = {
      id: newId(),
      siteId: built.site.id,
      date: '2026-09-26',
      kind: 'local event' as const,
      name: 'Fair',
    };
    await database.write((manager) => manager.insert(CalendarEntry, { ...entry, statedEffect: [1.2, 1.4] }));
    expect(await due()).toBe('what it stands on changed');
    await database.write((manager) => manager.delete(CalendarEntry, { id: entry.id }));

    await database.write((manager) =>
      manager.update(Shift, { siteId: built.site.id, name: 'Night' }, { leadTimeHours: 48 }),
    );
    expect(await due()).toBe('what it stands on changed');
    await database.write((manager) => manager.update(CareArea, { id: built.areas[0].id }, { bedsPerNurse: 4 }));
    server.time.now += 60;
    await issue();
    expect(await due()).toBeNull();
    const { outlook } = await latest();
    expect(outlook?.trigger).toBe('what it stands on changed');
    const night =
      outlook?.result.shifts.findIndex(({ name, from }) => name === 'Night' && from > server.time.now) ?? -1;
    const need = outlook?.result.areas[0].shifts[night];
    expect((outlook?.result.shifts[night].from ?? 0) - (need?.lastChanceAt ?? 0)).toBe(48 * 3600);
    expect(need?.nurseHours).toBeCloseTo(((need?.bedsToAdd ?? 0) * 10.5) / 4, 9);
    server.time.now = start;
  });

  it('is due each morning at five by local time, and a run that is not due issues nothing', async () => {
    const before = (await rows()).length;
    await issue();
    expect((await rows()).length).toBe(before);
    server.time.now = Date.parse('2026-09-22T03:59:00Z') / 1000;
    expect(await due()).toBeNull();
    server.time.now = Date.parse('2026-09-22T04:00:00Z') / 1000;
    expect(await due()).toBe('daily');
    server.time.now = start;
    expect(lastDailyTime('Europe/London', start)).toBe(Date.parse('2026-09-21T04:00:00Z') / 1000);
    expect(lastDailyTime('Europe/London', Date.parse('2026-09-21T03:00:00Z') / 1000)).toBe(
      Date.parse('2026-09-20T04:00:00Z') / 1000,
    );
  });
});

describe('last week against what came', () => {
  const then = start + 7 * day + 100;
  beforeEach(() => {
    server.time.now = then;
  });
  afterAll(() => {
    server.time.now = start;
  });

  it('is the outlook that stood a week ago, its whole days, and no count where no log speaks', async () => {
    const { lastWeek, actual } = await latest();
    const [first, second] = await rows();
    // The newest of those issued at least a week ago.
    expect(lastWeek?.outlookId).toBe(second.issuedAt <= then - 7 * day ? second.id : first.id);
    expect(lastWeek?.days).toHaveLength(7);
    expect(lastWeek?.days[0].date).toBe('2026-09-22');
    // The log ended on the day that the outlook was issued.
    expect(lastWeek?.days.every(({ count }) => count === null)).toBe(true);
    expect(actual.at(-1)?.count).toBeNull();
  });

  it('is left out when the newest of then is older than nine days', async () => {
    server.time.now = start + 17 * day;
    expect((await latest()).lastWeek).toBeNull();
  });
});

describe('weekHours', () => {
  const shifts = [
    { name: 'Day', startMinute: 420, endMinute: 1260 },
    { name: 'Night', startMinute: 1230, endMinute: 450 },
  ];

  it('reaches from the next full hour to the end of the last night', () => {
    const zone = makeZone('Europe/London');
    const { hours, daysUntil } = weekHours(zone, shifts, start);
    expect(hours[0]).toBe(start + 2400);
    expect(daysUntil).toBe(Date.parse('2026-10-05T23:00:00Z') / 1000);
    // The night ends at 07:30, so the hour to 08:00 is needed.
    expect(hours.at(-1)).toBe(Date.parse('2026-10-06T07:00:00Z') / 1000);
  });

  it.each([
    ['Europe/London', '2026-10-20T10:10:00Z'],
    ['Australia/Lord_Howe', '2026-09-28T10:10:00Z'],
    ['Asia/Kolkata', '2026-09-28T10:10:00Z'],
  ])('has fourteen local days in %s, clock changes included', (name, at) => {
    const zone = makeZone(name);
    const { hours, daysUntil } = weekHours(zone, shifts, Date.parse(at) / 1000);
    expect(zone.toLocal(daysUntil) % day).toBe(0);
    const first = zone.toLocal(Date.parse(at) / 1000);
    expect(Math.floor(zone.toLocal(daysUntil) / day) - Math.floor(first / day)).toBe(15);
    expect(hours).toContain(daysUntil);
    expect(hours.every((hour) => hour % 300 === 0)).toBe(true);
  });
});

describe('countAmbulances', () => {
  const table = (ways: readonly number[]) => ({
    length: ways.length,
    area: new Uint8Array(ways.length),
    arrivalAt: Float64Array.from(ways, (_, i) => start - i * 3600),
    bedSpaceAt: new Float64Array(ways.length),
    admissionDecisionAt: new Float64Array(ways.length),
    departureAt: new Float64Array(ways.length),
    disposition: new Uint8Array(ways.length),
    byAmbulance: Uint8Array.from(ways),
  });
  const count = (ways: readonly number[]) =>
    countAmbulances({ table: table(ways), areaIds: ['a'] }, ['a'], 'Europe/London');

  it('counts by area and four hours of the local day', () => {
    const ways = Array.from({ length: 2400 }, (_, i) => (i % 3 === 0 ? 1 : 0));
    const counted = count(ways);
    expect(counted?.known[0]).toEqual([400, 400, 400, 400, 400, 400]);
    expect(counted?.byAmbulance[0].reduce((sum, n) => sum + n, 0)).toBe(800);
  });

  it('tells nothing where few visits say how they came, or all say the same', () => {
    expect(count(Array.from({ length: 400 }, (_, i) => i % 2))).toBeNull();
    expect(count(Array.from({ length: 2000 }, (_, i) => (i % 2 === 0 ? 255 : i % 4 === 1 ? 1 : 0)))).toBeNull();
    expect(count(new Array<number>(2000).fill(0))).toBeNull();
  });
});

describe('a week that nobody forecast when it began', () => {
  it('is made afterwards from a model that knew nothing later, shown as such against what came, and never taken for the newest', async () => {
    server.time.now = start + 100;
    const before = await latest();
    expect(before.lastWeek).toBeNull();
    expect(await lookBacksDue(server.deps.database.read, built.site, server.time.now)).toEqual([]);
    // Trained to the fifteenth day before: eight days on it counts as too old.
    const known = { id: newId(), status: 'retired' as const, trainedTo: start - 15 * day + 3600 };
    await giveModel(server.deps.database, fitted, built, known);
    const asked = await lookBacksDue(server.deps.database.read, built.site, server.time.now);
    const times = ['2026-09-13T04:00:00Z', '2026-09-14T04:00:00Z'].map((text) => Date.parse(text) / 1000);
    expect(asked).toEqual(times.map((at) => ({ at, modelId: known.id })));
    await issue();
    await issue();
    expect(await lookBacksDue(server.deps.database.read, built.site, server.time.now)).toEqual([]);
    const made = (await rows()).filter(({ trigger }) => trigger === 'recomputed');
    expect(made.map(({ issuedAt }) => issuedAt)).toEqual(times);
    const after = await latest();
    expect(after.outlook?.id).toBe(before.outlook?.id);
    expect(after.lastWeek).toMatchObject({ recomputed: true, issuedAt: times[1] });
    // The log speaks of those days: Tuesday 15 to Sunday 20 September, and Monday is not over.
    expect(after.lastWeek?.days.map(({ count }) => count !== null)).toEqual([
      true,
      true,
      true,
      true,
      true,
      true,
      false,
    ]);
    const { days } = after.lastWeek ?? { days: [] };
    for (const { count, p2_5, p97_5 } of days.slice(0, 6)) {
      expect(count).toBeGreaterThan(0.5 * p2_5);
      expect(count).toBeLessThan(1.5 * p97_5);
    }
  }, 60_000);
});
