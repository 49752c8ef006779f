import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import { getWhatIf, type Scenario, type ScenarioLine } from '../../shared/api/scenarios.ts';
import { bedsAt } from '../../shared/domain/bed-schedule.ts';
import type { PlanChange } from '../../shared/domain/plan-change.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import { previewNeed } from '../../shared/forecasting/preview-need.ts';
import { readExactWire } from '../../shared/forecasting/read-exact-wire.ts';
import { needChangeOf } from '../../shared/forecasting/scenario.ts';
import { readPlan, readStaffedBedSteps } from '../../server/database/read-staffed-beds.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { BedChange } from '../../server/entities/BedChange.ts';
import type { CareArea } from '../../server/entities/CareArea.ts';
import { Scenario as ScenarioRow } from '../../server/entities/Scenario.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Monday, 15:13:20 in London (BST, UTC+1). */
const now = Date.parse('2026-09-21T14:13:20Z') / 1000;
const hour = 3600;
/** The same day, 21:00 in London. */
const nine = Date.parse('2026-09-21T20:00:00Z') / 1000;

let server: TestServer;
let fitted: ArrivalModelRow;
let built: BuiltSite;
let acute: CareArea;
let resuscitation: CareArea;
let charge: SignedIn;
let operations: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now, config: { threads: 2 }, replications: 2000 });
  fitted = await fitModel(server, await buildSite(server.deps.database), 10);
  expect(fitted.error).toBeNull();
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database);
  [acute, resuscitation] = built.areas;
  const siteId = built.site.id;
  path = `/api/sites/${siteId}`;
  const person = async (role: 'charge' | 'operations', name: string) =>
    server.signedInAs((await buildPerson(database, [{ role, siteId }], name)).id);
  charge = await person('charge', 'Noor Charge');
  operations = await person('operations', 'Ola Manager');
  await giveModel(database, fitted, built);
  await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [12, 3]));
  const counts = { areas: [{ areaId: acute.id, present: 10, waiting: 1, boarding: 3 }] };
  const nothing = { undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null };
  await charge.send('post', `${path}/censuses`, { takenAt: now, ...counts, ...nothing });
});

const bedsMore = (beds: number, from = nine, to = nine + 10 * hour): PlanChange => ({
  kind: 'beds',
  areaId: acute.id,
  from,
  to,
  beds,
});
const save = (changes: PlanChange[], name = 'More beds at night') =>
  operations.send('post', `${path}/scenarios`, { name, changes });
const faultsOf = (text: string) =>
  ((JSON.parse(text) as Problem).faults ?? []).map(({ at, message }) => `${at}: ${message}`);
const desk = async () => getWhatIf.reply.parse((await charge.get(`${path}/what-if`)).body);
const get = async (id: string) => (await charge.get(`${path}/scenarios/${id}`)).body as Scenario;
const eventsOf = async (subject: string) =>
  (await server.deps.database.read.find(AuditEvent, { where: { subject }, order: { id: 'ASC' } })).map(
    ({ event }) => event,
  );
async function confirmed(changes: PlanChange[]): Promise<Scenario> {
  const { id } = (await save(changes)).body as Scenario;
  const reply = await operations.send('post', `${path}/scenarios/${id}/confirmation`);
  expect(reply.status, reply.text).toBe(202);
  await server.workJobs();
  return get(id);
}

describe('as is, for the browser', () => {
  test('is what its contract says, answers 168 hours by the exact method, and stands for the hour', async () => {
    const { basis, missing } = await desk();
    expect(missing).toBeNull();
    expect(basis!.areas.map(({ name, boarding }) => [name, boarding])).toEqual([
      ['Acute', 3],
      ['Resuscitation', null],
    ]);
    const exact = readExactWire(basis!.exact);
    const preview = previewNeed(exact);
    expect(preview.map(({ shortfall }) => shortfall.length)).toEqual([168, 168]);
    expect(preview[0].staffed[0]).toBe(12);
    const change = needChangeOf([bedsMore(3)], { ...basis!.exact, areas: basis!.exact.areas });
    const changed = previewNeed(exact, change);
    expect(changed[0].staffed.filter((beds) => beds === 15)).toHaveLength(10);
    server.time.now += 1200;
    expect((await desk()).basis!.digest).toBe(basis!.digest);
    server.time.now += 2400;
    expect((await desk()).basis!.digest).not.toBe(basis!.digest);
  });

  test('is made anew when a census or the plan changes it', async () => {
    const before = (await desk()).basis!;
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [13, 3]));
    const after = (await desk()).basis!;
    expect(after.digest).not.toBe(before.digest);
    expect([after.planVersion, after.areas[0].staffedBeds[0].beds]).toEqual([2, 13]);
  });

  test('tells of a model that was fitted on hourly counts', async () => {
    const siteId = built.site.id;
    const setFrom = (staysFrom: 'stated mean' | null) =>
      server.deps.database.write((manager) => manager.update(ArrivalModelRow, { siteId }, { staysFrom }));
    const kinds = async () => (await desk()).cautions.map(({ kind }) => kind);
    expect(await kinds()).not.toContain('hourly counts');
    await setFrom('stated mean');
    expect(await kinds()).toContain('hourly counts');
    await setFrom(null);
  });

  test('says what is missing and what to do', async () => {
    const bare = await buildSite(server.deps.database);
    const role = [{ role: 'operations' as const, siteId: bare.site.id }];
    const other = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    const reply = await other.get(`/api/sites/${bare.site.id}/what-if`);
    const { missing, basis } = getWhatIf.reply.parse(reply.body);
    expect(basis).toBeNull();
    expect(missing!.reason).toBe('No arrival model is in use.');
    const saved = await other.send('post', `/api/sites/${bare.site.id}/scenarios`, {
      name: 'Nothing yet',
      changes: [{ kind: 'demand', areaId: null, percent: 10 }],
    });
    expect(saved.status).toBe(409);
  });
});

describe('a plan', () => {
  test('is saved with its inputs and seed, listed, and told of in the audit trail', async () => {
    const reply = await save([bedsMore(2), { kind: 'demand', areaId: null, percent: 10 }]);
    expect(reply.status, reply.text).toBe(201);
    const saved = reply.body as Scenario;
    expect(saved).toMatchObject({ state: 'saved', savedBy: 'Ola Manager', own: true, result: null });
    expect(saved.basisDigest).toBe((await desk()).basis!.digest);
    const { scenarios } = (await charge.get(`${path}/scenarios`)).body as { scenarios: ScenarioLine[] };
    expect(scenarios.map(({ id, own }) => [id, own])).toEqual([[saved.id, false]]);
    expect(await eventsOf(saved.id)).toEqual(['scenario.saved']);
  });

  test('with faults is refused whole, each by its field', async () => {
    const end = (await desk()).basis!.exact.hours.at(-1)!;
    const shut = { kind: 'closed' as const, areaId: resuscitation.id, from: nine, to: nine + 4 * hour };
    const reply = await save([
      bedsMore(9),
      bedsMore(-13, nine + 24 * hour, nine + 30 * hour),
      bedsMore(1, end - hour, end + hour),
      bedsMore(1, nine + 600 + 48 * hour, nine + 49 * hour),
      bedsMore(1, nine, nine),
      { ...shut, toAreaId: acute.id },
      { kind: 'surge', areaId: resuscitation.id, from: nine + 3 * hour, to: nine + 5 * hour, patients: 6 },
      { kind: 'boarding out', areaId: acute.id, patients: 4, by: nine },
      { kind: 'boarding out', areaId: resuscitation.id, patients: 1, by: nine },
      { kind: 'demand', areaId: 'elsewhere', percent: 5 },
      { ...shut, toAreaId: resuscitation.id, from: nine + 20 * hour, to: nine + 21 * hour },
    ]);
    expect(reply.status).toBe(400);
    const outside = 'The hours looked at are Mon 15:13 to Mon 15:00, seven days on.';
    expect(faultsOf(reply.text)).toEqual([
      'changes.0.beds: Acute would have 21 staffed beds on Mon 21:00: 20 bed spaces exist.',
      'changes.1.beds: Acute has 12 staffed beds on Tue 21:00: no more can be taken away.',
      `changes.2.to: ${outside}`,
      'changes.3.from: Choose a full or a half hour.',
      'changes.4.to: It must end after it starts.',
      'changes.6.areaId: Resuscitation is closed in that time: put the surge where its arrivals go.',
      'changes.7.patients: 3 boarding patients are counted in Acute.',
      'changes.8.areaId: Resuscitation has no census: nobody is counted as boarding.',
      'changes.9.areaId: This care area is not one that the model in use can forecast.',
      'changes.10.toAreaId: Its arrivals must go to another area.',
    ]);
    const counts = { siteId: built.site.id };
    expect(await server.deps.database.read.countBy(ScenarioRow, counts)).toBe(0);
  });

  test('takes figures within their limits only, and no name that could identify a person', async () => {
    expect(faultsOf((await save([bedsMore(500)])).text)).toEqual(['changes.0.beds: At most 499 more']);
    expect(faultsOf((await save([{ ...bedsMore(1), beds: 1.5 } as PlanChange])).text)).toEqual([
      'changes.0.beds: Whole numbers only',
    ]);
    expect(faultsOf((await save([{ kind: 'demand', areaId: null, percent: 201 }])).text)).toEqual([
      'changes.0.percent: At most 200 %',
    ]);
    expect(faultsOf((await save([])).text)).toEqual(['changes: A plan needs at least one change']);
    expect(faultsOf((await save([bedsMore(1)], 'Bed for 020 7946 0958')).text)[0]).toMatch(/^name: The name seems/);
  });

  test('is withdrawn by its author alone', async () => {
    const { id } = (await save([bedsMore(1)])).body as Scenario;
    const role = [{ role: 'operations' as const, siteId: built.site.id }];
    const other = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    const refused = await other.send('post', `${path}/scenarios/${id}/withdrawal`);
    expect([refused.status, (JSON.parse(refused.text) as Problem).detail]).toEqual([
      403,
      'This plan was saved by Ola Manager; only its own author withdraws it.',
    ]);
    expect((await operations.send('post', `${path}/scenarios/${id}/withdrawal`)).status).toBe(200);
    expect((await charge.get(`${path}/scenarios/${id}`)).status).toBe(404);
    expect(((await charge.get(`${path}/scenarios`)).body as { scenarios: unknown[] }).scenarios).toEqual([]);
  });

  test('of another site is not found', async () => {
    const { id } = (await save([bedsMore(1)])).body as Scenario;
    const elsewhere = await buildSite(server.deps.database);
    const role = [{ role: 'operations' as const, siteId: elsewhere.site.id }];
    const other = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    expect((await other.get(`/api/sites/${elsewhere.site.id}/scenarios/${id}`)).status).toBe(404);
    expect((await other.get(`${path}/scenarios/${id}`)).status).toBe(404);
  });
});

describe('a confirmation', () => {
  test('stores every difference with its paired interval; more beds never raise a chance; same digits again', async () => {
    const plan = await confirmed([
      bedsMore(3),
      { kind: 'beds', areaId: resuscitation.id, from: nine, to: nine + 24 * hour, beds: 1 },
    ]);
    expect(plan).toMatchObject({ state: 'confirmed', progress: null, error: null });
    const { rows, shifts, replications, hours } = plan.result!;
    expect([replications, hours.length]).toEqual([2000, 168]);
    expect(rows.map(({ areaId }) => areaId)).toEqual([acute.id, resuscitation.id, null]);
    for (const row of rows) {
      expect(row.shifts).toHaveLength(shifts.length);
      for (const { asIs, plan: with_, difference, low, high } of [...row.shifts, row.bedHoursShort]) {
        expect(with_).toBeLessThanOrEqual(asIs);
        expect(difference).toBeCloseTo(with_ - asIs, 12);
        expect(low).toBeLessThanOrEqual(difference);
        expect(high).toBeGreaterThanOrEqual(difference);
      }
    }
    const night = shifts.findIndex(({ from }) => from === nine);
    expect(rows[0].shifts[night].difference).toBeLessThan(-0.02);
    expect(rows[0].shifts[night].high).toBeLessThan(0);
    const repeat = await operations.send('post', `${path}/scenarios/${plan.id}/repeat`);
    expect(repeat.body).toMatchObject({ sameDigits: true, storedDigest: plan.resultDigest });
    // Saved on the same basis, another plan stands beside the same as is.
    const other = await confirmed([{ kind: 'demand', areaId: null, percent: 20 }]);
    expect(other.basisDigest).toBe(plan.basisDigest);
    expect(other.result!.rows[0].hours.asIs).toEqual(rows[0].hours.asIs);
    expect(other.result!.rows[0].bedHoursShort.difference).toBeGreaterThan(0);
    expect(await eventsOf(plan.id)).toEqual(['scenario.saved', 'scenario.confirmation-started', 'scenario.confirmed']);
    expect((await operations.send('post', `${path}/scenarios/${plan.id}/confirmation`)).status).toBe(409);
  });

  test('agrees with the exact preview of the same chances within the error that the page states', async () => {
    const changes: PlanChange[] = [{ kind: 'demand', areaId: null, percent: 15 }, bedsMore(2)];
    const plan = await confirmed(changes);
    const { basis } = await desk();
    const preview = previewNeed(readExactWire(basis!.exact), needChangeOf(changes, basis!.exact));
    // The exact method takes stays as exponential and factors as constant: see `previewError` for how far that may lead.
    plan.result!.rows.slice(0, 2).forEach((row, a) => {
      row.hours.plan.forEach((chance, h) => {
        expect(Math.abs(chance - preview[a].shortfall[h]), `${String(a)}, ${String(h)}`).toBeLessThan(0.1);
      });
    });
  });

  test('can be cancelled while it waits, and started again', async () => {
    const { id } = (await save([bedsMore(1)])).body as Scenario;
    await server.workJobs();
    await server.deps.jobs.stop();
    await operations.send('post', `${path}/scenarios/${id}/confirmation`);
    expect((await get(id)).progress).toEqual({ share: 0, text: 'Waiting to start' });
    expect((await operations.send('post', `${path}/scenarios/${id}/withdrawal`)).status).toBe(409);
    // A steward may cancel fits, but not a plan's confirmation, by whatever way.
    const { jobId } = await server.deps.database.read.findOneByOrFail(ScenarioRow, { id });
    const role = [{ role: 'steward' as const, siteId: built.site.id }];
    const steward = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    expect((await steward.send('post', `${path}/jobs/${jobId!}/cancel`)).status).toBe(403);
    const cancelled = await operations.send('post', `${path}/scenarios/${id}/confirmation/cancel`);
    expect(cancelled.body).toMatchObject({ state: 'cancelled', error: null });
    expect((await operations.send('post', `${path}/scenarios/${id}/confirmation/cancel`)).status).toBe(409);
    await server.restartJobs();
    await operations.send('post', `${path}/scenarios/${id}/confirmation`);
    await server.workJobs();
    expect((await get(id)).state).toBe('confirmed');
  });

  test('can be cancelled while it runs', async () => {
    const { id } = (await save([bedsMore(1)])).body as Scenario;
    await server.workJobs();
    // So many pairs that it cannot be done before it is looked at.
    const { input } = await server.deps.database.read.findOneOrFail(ScenarioRow, {
      where: { id },
      select: { input: true },
    });
    const replications = 500_000;
    await server.deps.database.write((manager) =>
      manager.update(
        ScenarioRow,
        { id },
        { replications, input: JSON.stringify({ ...(JSON.parse(input) as OutlookInput), replications }) },
      ),
    );
    await operations.send('post', `${path}/scenarios/${id}/confirmation`);
    await expect.poll(async () => (await get(id)).progress?.share ?? 0, { timeout: 20_000 }).toBeGreaterThan(0);
    const reply = await operations.send('post', `${path}/scenarios/${id}/confirmation/cancel`);
    expect(reply.body).toMatchObject({ state: 'cancelled' });
    await server.workJobs();
    expect(await get(id)).toMatchObject({ state: 'cancelled', result: null });
  });
});

describe('adopting', () => {
  const adopt = (id: string, reason = 'Agreed at the bed meeting', as?: 'every week') =>
    operations.send('post', `${path}/scenarios/${id}/adoption`, { reason, ...(as ? { as } : {}) });
  const inForce = async (at: number) => {
    const { database } = server.deps;
    const zone = makeZone(built.site.timeZone);
    const steps = await readStaffedBedSteps(database.read, built.site.id, zone, [acute.id], now, now + 7 * 24 * hour);
    return bedsAt(steps!.get(acute.id)!, at);
  };

  test('puts the beds into force as dated exceptions with the reason, once', async () => {
    const plan = await confirmed([bedsMore(2), bedsMore(1, nine + 2 * hour, nine + 4 * hour)]);
    const reply = await adopt(plan.id);
    expect(reply.status, reply.text).toBe(200);
    expect(reply.body).toMatchObject({ exceptions: 3, scenario: { adoptedBy: 'Ola Manager', adoptedAt: now } });
    expect(await Promise.all([-1, 0, 7200, 4 * hour, 10 * hour].map((after) => inForce(nine + after)))).toEqual([
      12, 14, 15, 14, 12,
    ]);
    const made = await server.deps.database.read.findBy(BedChange, { siteId: built.site.id });
    expect(new Set(made.map(({ kind, reason }) => `${kind}: ${reason}`))).toEqual(
      new Set(['dated exception: Agreed at the bed meeting']),
    );
    expect((await eventsOf(plan.id)).at(-1)).toBe('scenario.adopted');
    expect((await adopt(plan.id)).status).toBe(409);
  });

  test('never goes below an area’s safe minimum, and changes nothing then', async () => {
    const plan = await confirmed([bedsMore(-5)]);
    const reply = await adopt(plan.id);
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual([
      'Acute, Mon 21:00: 7 is below the safe minimum of 8. It may be tried, but not staffed.',
    ]);
    expect(await server.deps.database.read.countBy(BedChange, { siteId: built.site.id })).toBe(0);
  });

  test('asks for a reason, for a confirmation, and for beds to change', async () => {
    const { id } = (await save([bedsMore(1)])).body as Scenario;
    expect(faultsOf((await adopt(id, 'x')).text)).toEqual(['reason: Say why']);
    expect((await adopt(id)).status).toBe(409);
    const noBeds = await confirmed([{ kind: 'demand', areaId: null, percent: 10 }]);
    expect((JSON.parse((await adopt(noBeds.id)).text) as Problem).detail).toContain('nothing to adopt');
    const named = await confirmed([bedsMore(1)]);
    expect(faultsOf((await adopt(named.id, 'Call 020 7946 0958')).text)[0]).toMatch(
      /^reason: The reason seems to hold/,
    );
  });

  test('is refused when the staffed beds have changed since', async () => {
    const plan = await confirmed([bedsMore(1)]);
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [13, 3]));
    const reply = await adopt(plan.id);
    expect([reply.status, (JSON.parse(reply.text) as Problem).detail]).toEqual([
      409,
      'The staffed beds of Acute have changed since this plan was saved.',
    ]);
  });

  test('for every week saves a new version of the weekly plan, with its own half hours alone changed', async () => {
    const plan = await confirmed([bedsMore(2), bedsMore(-1, nine + 30 * hour, nine + 32 * hour)]);
    // Two hours of it have passed: they come again with the week.
    server.time.now = nine + 2 * hour;
    const reply = await adopt(plan.id, 'Agreed for the winter', 'every week');
    expect(reply.status, reply.text).toBe(200);
    expect(reply.body).toMatchObject({ exceptions: 0, planVersion: 2, scenario: { adoptedAs: 'every week' } });
    const { read } = server.deps.database;
    const saved = await readPlan(read, built.site.id);
    expect(saved!.plan).toMatchObject({ version: 2, savedBy: 'Ola Manager', reason: 'Agreed for the winter' });
    const halfHours = saved!.areas.find(({ areaId }) => areaId === acute.id)!.halfHours;
    // Monday 21:00 is half hour 42: ten hours of two beds more; Wednesday 03:00 is half hour 102: two hours of one fewer.
    const expected = Array.from({ length: 336 }, (_, i) => (i >= 42 && i < 62 ? 14 : i >= 102 && i < 106 ? 11 : 12));
    expect(halfHours).toEqual(expected);
    expect(saved!.areas.find(({ areaId }) => areaId === resuscitation.id)!.halfHours).toEqual(new Array(336).fill(3));
    expect(await read.countBy(BedChange, { siteId: built.site.id })).toBe(0);
    expect((await eventsOf(plan.id)).at(-1)).toBe('scenario.adopted');
    expect(await eventsOf(saved!.plan.id)).toEqual(['staffed-beds.plan-saved']);
  });

  test('for every week is refused where an exception stood in place of the weekly plan, or below the safe minimum', async () => {
    const exception = { areaId: acute.id, fromAt: nine, untilAt: nine + hour, beds: 13, reason: 'Fair' };
    expect((await operations.send('post', `${path}/staffed-bed-exceptions`, exception)).status).toBe(201);
    const plan = await confirmed([bedsMore(1)]);
    const reply = await adopt(plan.id, 'Agreed', 'every week');
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual([
      expect.stringMatching(
        /^Acute, Mon 21:00: An exception of that date stands in place of the weekly plan \(13 for 12\)/,
      ),
      expect.stringMatching(/^Acute, Mon 21:30: /),
    ]);
    const low = await confirmed([bedsMore(-5, nine + 24 * hour, nine + 25 * hour)]);
    expect(faultsOf((await adopt(low.id, 'Agreed', 'every week')).text)[0]).toContain('below the safe minimum of 8');
    expect((await readPlan(server.deps.database.read, built.site.id))!.plan.version).toBe(1);
    expect((await adopt(plan.id)).body).toMatchObject({ exceptions: 2, planVersion: null });
  });

  test('leaves out what has passed by then', async () => {
    const plan = await confirmed([bedsMore(1)]);
    server.time.now = nine + 9 * hour + 60;
    expect((await adopt(plan.id)).body).toMatchObject({ exceptions: 1 });
    const [made] = await server.deps.database.read.findBy(BedChange, { siteId: built.site.id });
    expect([made.fromAt, made.untilAt]).toEqual([server.time.now, nine + 10 * hour]);
    const late = await confirmed([bedsMore(1, nine + 12 * hour, nine + 13 * hour)]);
    server.time.now = nine + 14 * hour;
    expect((await adopt(late.id)).status).toBe(400);
  });
});
