import { createHash } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Outlook, Tonight } from '../../shared/api/outlooks.ts';
import { censusAt } from '../../demo/census-at.ts';
import type { OutlookInput, OutlookResult } from '../../shared/forecasting/outlook-types.ts';
import { readModelParameters } from '../../server/database/read-model.ts';
import { newId } from '../../server/database/new-id.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import { computeOutlook } from '../../server/features/outlook/compute-outlook.ts';
import { digestOf, OutlookIssuer } from '../../server/features/outlook/issuer.ts';
import { readOutlook } from '../../server/features/outlook/present.ts';
import { makeSimulationPool, type SimulationPool } from '../../server/simulation/pool.ts';
import { softwareVersion } from '../../server/software-version.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Monday, 15:13:20 in London (BST, UTC+1). */
const now = Date.parse('2026-09-21T14:13:20Z') / 1000;
const hour = 3600;
const day = 86_400;
let server: TestServer;
let fitted: ArrivalModelRow;
let built: BuiltSite;
let acute: CareArea;
let resuscitation: CareArea;
let charge: SignedIn;
let operations: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now, config: { threads: 2 } });
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
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }], 'Noor Charge')).id);
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }])).id);
});

const readied = async (beds = [14, 3]) => {
  await giveModel(server.deps.database, fitted, built);
  // Saving the plan issues the first outlook.
  expect((await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, beds))).status).toBe(200);
};
const count = (area: CareArea, present: number, waiting = 0, boarding = 0) => ({
  areaId: area.id,
  present,
  waiting,
  boarding,
});
const nothing = { areas: [], undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null };
async function enter(body: object, at = server.time.now): Promise<string> {
  const reply = await charge.send('post', `${path}/censuses`, { takenAt: at, ...nothing, ...body });
  expect(reply.status, reply.text).toBe(201);
  const { outlookId, reason } = reply.body as { outlookId: string | null; reason: string | null };
  expect(reason).toBeNull();
  return outlookId!;
}
const getOutlook = async (id: string) => (await charge.get(`${path}/outlooks/${id}`)).body as Outlook;
const tonight = async () => (await charge.get(`${path}/tonight`)).body as Tonight;
const kindsOf = ({ cautions }: Tonight) => cautions.map(({ kind }) => kind);
const outlooks = () => server.deps.database.read.countBy(OutlookRow, { siteId: built.site.id });

describe('saving a census', () => {
  test('issues an outlook that is stored with everything it was computed from', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12, 3, 2), count(resuscitation, 2)], undecidedWaiting: 4 });
    const row = (await readOutlook(server.deps.database.read, built.site.id, id))!;
    expect(row).toMatchObject({ issuedAt: now, trigger: 'census saved', softwareVersion, replications: 400 });
    expect(row.digest).toBe(createHash('sha256').update(row.result).digest('hex'));
    const input = JSON.parse(row.input) as OutlookInput;
    expect(input).toMatchObject({
      issuedAt: now,
      timeZone: 'Europe/London',
      seed: row.seed,
      planningRisk: 0.1,
      undecided: { takenAt: now, waiting: 4 },
      arrivalsSince: null,
    });
    expect(input.areas.map(({ census }) => census)).toEqual([
      { takenAt: now, present: 12, waiting: 3, boarding: 2 },
      { takenAt: now, present: 2, waiting: 0, boarding: 0 },
    ]);
    expect(input.areas.map(({ staffedBeds }) => staffedBeds)).toEqual([
      [{ at: now, beds: 14 }],
      [{ at: now, beds: 3 }],
    ]);
    expect(input.hours).toHaveLength(36);
    expect(input.hours[0]).toBe(Date.parse('2026-09-21T15:00Z') / 1000);
    expect(input.shifts.map(({ name }) => name)).toEqual(['Late', 'Night', 'Early', 'Late', 'Night']);

    const outlook = await getOutlook(id);
    expect(outlook).toMatchObject({ id, trigger: 'census saved', seed: row.seed, planningRisk: 0.1 });
    expect(outlook.census[0]).toEqual({ ...count(acute, 12, 3, 2), takenAt: now });
    expect(outlook.model.weeksOfHistory).toBeGreaterThan(10);
    expect(outlook.result).toMatchObject({ hours: input.hours, replications: 400 });
    expect((await tonight()).outlook).toEqual(outlook);
  });

  test('gives figures that hang together', async () => {
    await readied();
    const { result } = await getOutlook(await enter({ areas: [count(acute, 12), count(resuscitation, 1)] }));
    for (const area of [...result.areas, result.pooled]) {
      for (let h = 0; h < 36; h += 1) {
        const { p5, p10, p25, p50, p75, p90, p95, mean } = area.need;
        const ascending = [p5, p10, p25, p50, p75, p90, p95].map((figures) => figures[h]);
        expect(ascending).toEqual(ascending.toSorted((a, b) => a - b));
        expect(mean[h]).toBeGreaterThanOrEqual(0);
        expect(area.headroom[h]).toBe(area.staffed[h] - p90[h]);
        // Within the hour that ends there is at least as likely as at its end.
        expect(area.shortfallWithin[h].chance).toBeGreaterThanOrEqual(area.shortfall[h].chance);
      }
    }
    expect(result.pooled.staffed[0]).toBe(17);
    expect(result.areas.every(({ counted }) => counted)).toBe(true);
  });

  test('moves the figures: a full department is short at once, an empty one is not', async () => {
    await readied();
    const full = await getOutlook(await enter({ areas: [count(acute, 60), count(resuscitation, 0)] }));
    expect(full.result.areas[0].shortfall[0].chance).toBeGreaterThan(0.99);
    server.time.now += 60;
    const empty = await getOutlook(await enter({ areas: [count(acute, 0), count(resuscitation, 0)] }));
    expect(empty.result.areas[0].shortfall[0].chance).toBeLessThan(0.01);
  });

  test('five at once are answered by at most two runs, and the newest outlook has all five', async () => {
    await readied();
    const before = await outlooks();
    const ids = await Promise.all(
      [1, 2, 3, 4, 5].map((n) => enter({ areas: [count(acute, 10 + n)] }, now - 60 * (6 - n))),
    );
    expect((await outlooks()) - before).toBeLessThanOrEqual(2);
    expect(new Set(ids).size).toBeLessThanOrEqual(2);
    const { outlook, computing } = await tonight();
    expect(computing).toBe(false);
    expect(outlook!.census[0]).toEqual({ ...count(acute, 15), takenAt: now - 60 });
    expect(ids).toContain(outlook!.id);
  });
});

describe('an issued outlook', () => {
  const repeat = async (id: string) => (await charge.send('post', `${path}/outlooks/${id}/repeat`)).body as object;

  test('computed again from its stored inputs has the same digits, and stores nothing', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12)], arrivalsSinceMidnight: 40 });
    server.time.now += 3 * hour;
    const before = await outlooks();
    const { digest } = await server.deps.database.read.findOneByOrFail(OutlookRow, { id });
    expect(await repeat(id)).toEqual({ sameDigits: true, storedDigest: digest, repeatedDigest: digest });
    expect(await outlooks()).toBe(before);
  });

  test('whose input were not the stored one would be found out', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12)] });
    const { input } = (await readOutlook(server.deps.database.read, built.site.id, id))!;
    const changed = JSON.stringify({ ...(JSON.parse(input) as OutlookInput), seed: 5 });
    await server.deps.database.write((manager) => manager.update(OutlookRow, { id }, { input: changed }));
    expect(await repeat(id)).toMatchObject({ sameDigits: false });
  });

  test('has the same digits on one thread and on two', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12, 4, 3)], undecidedWaiting: 2, arrivalsSinceMidnight: 50 });
    const row = (await readOutlook(server.deps.database.read, built.site.id, id))!;
    const parameters = await readModelParameters(server.deps.database.read, row.modelId);
    const one = makeSimulationPool(1);
    try {
      const input = JSON.parse(row.input) as OutlookInput;
      const result: OutlookResult = await computeOutlook(one, parameters, input);
      expect(server.deps.simulation.threads).toBe(2);
      expect(digestOf(JSON.stringify(result))).toBe(row.digest);
      // As many replications as a server takes.
      const full = await new OutlookIssuer(server.deps).issue(built.site.id, 'timetable');
      const stored = (await readOutlook(server.deps.database.read, built.site.id, full.outlookId!))!;
      expect(stored.replications).toBe(10_000);
      const again = await computeOutlook(one, parameters, JSON.parse(stored.input) as OutlookInput);
      expect(digestOf(JSON.stringify(again))).toBe(stored.digest);
    } finally {
      await one.close();
    }
  });

  test('is not changed by what comes after it', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12)] });
    const before = await getOutlook(id);
    server.time.now += hour;
    await enter({ areas: [count(acute, 3)] });
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [9, 3]));
    expect(await getOutlook(id)).toEqual(before);
  });

  test('of another site is not found', async () => {
    await readied();
    const id = await enter({ areas: [count(acute, 12)] });
    const other = await buildSite(server.deps.database);
    const role = [{ role: 'charge' as const, siteId: other.site.id }];
    const stranger = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    expect((await stranger.get(`/api/sites/${other.site.id}/outlooks/${id}`)).status).toBe(404);
    expect((await stranger.send('post', `/api/sites/${other.site.id}/outlooks/${id}/repeat`)).status).toBe(404);
    expect((await stranger.get(`${path}/outlooks/${id}`)).status).toBe(404);
    expect((await charge.get(`${path}/outlooks/nothing`)).status).toBe(404);
  });
});

describe('without what an outlook needs', () => {
  const save = async () =>
    (await charge.send('post', `${path}/censuses`, { takenAt: now, ...nothing, areas: [count(acute, 5)] }))
      .body as object;

  const sentence = (words: string) => expect.stringContaining(words) as string;

  test('no model: the census is kept, and Tonight says what to do', async () => {
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [14, 3]));
    expect(await save()).toMatchObject({ outlookId: null, reason: sentence('no arrival model') });
    expect(await tonight()).toMatchObject({
      outlook: null,
      missing: { reason: 'no model', next: expect.stringContaining('data steward') as string },
      cautions: [],
      moved: null,
    });
    await giveModel(server.deps.database, fitted, built, { status: 'candidate' });
    expect(await save()).toMatchObject({ outlookId: null, reason: sentence('no arrival model') });
  });

  test('no plan', async () => {
    await giveModel(server.deps.database, fitted, built);
    expect(await save()).toMatchObject({ outlookId: null, reason: sentence('no staffed-bed plan') });
    expect((await tonight()).missing).toMatchObject({
      reason: 'no staffed-bed plan',
      next: expect.stringContaining('operations manager') as string,
    });
    // The plan alone was missing: saving it issues the outlook.
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [14, 3]));
    expect(await tonight()).toMatchObject({ missing: null, outlook: { trigger: 'staffed beds changed' } });
  });

  test('an outlook from the day before is no longer tonight’s', async () => {
    await readied();
    await enter({ areas: [count(acute, 5)] });
    server.time.now += day;
    expect((await tonight()).outlook).not.toBeNull();
    server.time.now += 1;
    expect(await tonight()).toMatchObject({ outlook: null, missing: { reason: 'not computed yet' } });
  });

  test('an area without a census is not counted, and never looks calm', async () => {
    await readied();
    const outlook = await getOutlook(await enter({ areas: [count(acute, 5)] }));
    expect(outlook.result.areas.map(({ areaId, counted }) => [areaId, counted])).toEqual([
      [acute.id, true],
      [resuscitation.id, false],
    ]);
    expect(outlook.census[1]).toMatchObject({ takenAt: null, present: null });
    const page = await tonight();
    const caution = page.cautions.find(({ kind }) => kind === 'area not counted');
    expect(caution?.text).toContain('Not counted: Resuscitation.');
    await enter({ areas: [count(resuscitation, 0)] });
    expect(kindsOf(await tonight())).not.toContain('area not counted');
  });

  test('an area that the model does not know is named', async () => {
    await database(async (manager) => {
      await manager.insert(CareArea, { ...acute, id: newId(), code: 2, position: 2, name: 'New wing' });
    });
    await giveModel(server.deps.database, fitted, built);
    const areas = await server.deps.database.read.find(CareArea, {
      where: { siteId: built.site.id },
      order: { position: 'ASC' },
    });
    await operations.send('put', `${path}/staffed-beds`, flatPlan(areas, [14, 3, 10]));
    await enter({ areas: areas.map((area) => count(area, 2)) });
    expect((await tonight()).cautions[0]).toEqual({
      kind: 'area not counted',
      text: 'Not forecast: New wing. The model in use does not know this area. Fit a new one.',
    });
  });

  const database: TestServer['deps']['database']['write'] = (work) => server.deps.database.write(work);
});

describe('arrivals since midnight', () => {
  test('are compared with what the model expected, from local midnight on', async () => {
    await readied();
    const id = await enter({ arrivalsSinceMidnight: 55 });
    const { input } = (await readOutlook(server.deps.database.read, built.site.id, id))!;
    const midnight = Date.parse('2026-09-20T23:00Z') / 1000;
    expect((JSON.parse(input) as OutlookInput).arrivalsSince).toEqual({ from: midnight, to: now, count: 55 });
    const { arrivalsSoFar } = (await getOutlook(id)).result;
    expect(arrivalsSoFar).toMatchObject({ counted: 55 });
    expect(arrivalsSoFar!.p10).toBeLessThan(arrivalsSoFar!.expected);
    expect(arrivalsSoFar!.p90).toBeGreaterThan(arrivalsSoFar!.expected);
    expect(arrivalsSoFar!.factor).toBeCloseTo(55 / arrivalsSoFar!.expected, 10);
    // A count is some of the evidence, never all of it: the forecast moves its way, by less.
    const move = arrivalsSoFar!.move!;
    expect(Math.sign(move - 1)).toBe(Math.sign(arrivalsSoFar!.factor - 1));
    expect(Math.abs(Math.log(move))).toBeLessThan(Math.abs(Math.log(arrivalsSoFar!.factor)));
    const asExpected = await getOutlook(await enter({ arrivalsSinceMidnight: Math.round(arrivalsSoFar!.expected) }));
    expect(Math.abs(asExpected.result.arrivalsSoFar!.move! - 1)).toBeLessThan(0.01);
  });

  test('say nothing within a quarter of an hour of it', async () => {
    await readied();
    server.time.now = Date.parse('2026-09-21T23:14Z') / 1000;
    const early = await getOutlook(await enter({ arrivalsSinceMidnight: 1 }));
    expect(early.result.arrivalsSoFar).toBeNull();
    server.time.now += 60;
    const later = await getOutlook(await enter({ arrivalsSinceMidnight: 1 }));
    expect(later.result.arrivalsSoFar).toMatchObject({ counted: 1 });
  });
});

describe('the hours just past', () => {
  test('are the nearest census within half an hour, else the log’s count, else nothing', async () => {
    const from = now - 6 * day - (now % day) - hour;
    const visits = inventVisits(built, from, now);
    const takenAt = now - 4 * hour;
    const known = visits
      .filter(({ arrivalAt }) => arrivalAt < takenAt)
      .map((visit) => ({ ...visit, departureAt: (visit.departureAt ?? now) < takenAt ? visit.departureAt : null }));
    await buildVisitLog(server.deps.database, built, known, { periodFrom: from, periodTo: now, takenAt });
    await readied();
    const clock = (text: string) => Date.parse(`2026-09-21T${text}Z`) / 1000;
    server.time.now = clock('11:00:00');
    await enter({ areas: [count(acute, 31)] }, clock('08:25:00'));
    await enter({ areas: [count(acute, 33)] }, clock('09:20:00'));
    await enter({ areas: [count(acute, 34)] }, clock('09:20:00'));
    await enter({ areas: [count(acute, 35)] }, clock('09:31:00'));
    server.time.now = now;
    const { past } = await tonight();
    expect(past.map(({ at }) => at)).toEqual(
      Array.from({ length: 12 }, (_, index) => clock('14:00:00') - (11 - index) * hour),
    );
    const at = (text: string, area: CareArea) =>
      past.find((each) => each.at === clock(text))?.areas.find(({ areaId }) => areaId === area.id);
    expect(at('08:00:00', acute)).toEqual({ areaId: acute.id, present: 31, staffed: 14, source: 'census' });
    // Of two as near, the one saved later; the one at 09:31 is nearer to 10:00.
    expect(at('09:00:00', acute)).toMatchObject({ present: 34, source: 'census' });
    expect(at('10:00:00', acute)).toMatchObject({ present: 35, source: 'census' });
    // The demo's own head count is independent of the server's.
    for (const text of ['04:00:00', '07:00:00']) {
      const heads = censusAt(visits, clock(text), [acute.id, resuscitation.id]);
      expect(at(text, acute)).toMatchObject({ present: heads[0].present, source: 'log' });
      expect(at(text, resuscitation)).toMatchObject({ present: heads[1].present, staffed: 3, source: 'log' });
    }
    expect(at('09:00:00', resuscitation)).toMatchObject({ source: 'log' });
    for (const text of ['11:00:00', '14:00:00']) {
      expect(at(text, acute)).toEqual({ areaId: acute.id, present: null, staffed: 14, source: null });
    }
  });

  test('of a log’s first days, or of one that lacks those still present, say nothing: the count would be too low', async () => {
    await readied();
    const from = now - 2 * day - (now % day) - hour;
    const visits = inventVisits(built, from, now);
    const log = await buildVisitLog(server.deps.database, built, visits, {
      periodFrom: from,
      periodTo: now,
      takenAt: now,
    });
    const sources = async () =>
      new Set((await tonight()).past.flatMap(({ areas }) => areas.map(({ source }) => source)));
    expect(await sources()).toEqual(new Set([null]));
    const change = (change: object) =>
      server.deps.database.write((manager) =>
        manager.query(
          `UPDATE visit_log SET ${Object.keys(change)
            .map((name) => `${name} = ?`)
            .join(', ')} WHERE id = ?`,
          [...Object.values(change), log.id],
        ),
      );
    await change({ periodFrom: from - 3 * day });
    expect(await sources()).toEqual(new Set(['log']));
    await change({ selectedBy: 'departed' });
    expect(await sources()).toEqual(new Set([null]));
    await change({ selectedBy: 'arrived', status: 'withdrawn' });
    expect(await sources()).toEqual(new Set([null]));
  });
});

describe('Tonight', () => {
  test('that is asked for again and again while one computes brings one further, which sees all that was saved', async () => {
    await readied();
    const { deps } = server;
    // A pool that computes only once it is told to.
    let release: () => void = () => undefined;
    const told = new Promise<void>((resolve) => (release = resolve));
    let runs = 0;
    const held: SimulationPool = {
      threads: deps.simulation.threads,
      close: () => Promise.resolve(),
      async run(...task) {
        runs += 1;
        await told;
        return deps.simulation.run(...task);
      },
    };
    const issuer = new OutlookIssuer({ ...deps, simulation: held }, 400);
    const first = issuer.issue(built.site.id, 'census saved');
    await expect.poll(() => runs).toBeGreaterThan(0);

    const further: ReturnType<OutlookIssuer['issue']>[] = [];
    for (const present of [5, 6, 7]) {
      await enter({ areas: [count(acute, present)] });
      further.push(issuer.issue(built.site.id, 'census saved'));
    }
    await enter({ areas: [count(resuscitation, 2)] });
    further.push(issuer.issue(built.site.id, 'staffed beds changed'));
    release();
    const one = await first;
    const others = new Set((await Promise.all(further)).map(({ outlookId }) => outlookId));
    await issuer.settle();
    expect(others.size).toBe(1);
    const [other] = others;
    expect(other).not.toBe(one.outlookId);
    expect(issuer.computing(built.site.id)).toBe(false);
    const present = async (id: string | null) => (await getOutlook(id!)).census.map((entry) => entry.present);
    expect(await present(one.outlookId)).toEqual([null, null]);
    expect(await present(other)).toEqual([7, 2]);
  });

  test('warns by the age of the census, until it is dropped', async () => {
    await readied();
    await enter({ areas: [count(acute, 9), count(resuscitation, 1)] });
    expect(kindsOf(await tonight())).toEqual(['winter not seen yet']);
    server.time.now = now + 2 * hour;
    expect(kindsOf(await tonight())).toEqual(['winter not seen yet']);
    server.time.now += 60;
    expect((await tonight()).cautions[0]).toEqual({
      kind: 'census old',
      text: 'Census 2 h 1 min old. Enter a new one before you act.',
    });
    server.time.now = now + 8 * hour;
    expect(kindsOf(await tonight())).toEqual(['without a census', 'winter not seen yet']);
  });

  test('says why the outlook moved since the last', async () => {
    await readied();
    await enter({ areas: [count(acute, 3), count(resuscitation, 0)] });
    server.time.now += 600;
    await enter({ areas: [count(acute, 24, 6, 5), count(resuscitation, 0)] });
    expect((await tonight()).moved).toMatch(
      /^Acute at \d\d:00 moved from .*% to .*% since the last outlook: Acute was counted again \(3 to 24 present, 0 to 5 boarding\)\.$/,
    );
    const body = { areaId: acute.id, beds: 20, blocked: 0, until: 'end of next shift', reason: 'All bays open' };
    const reply = await charge.send('post', `${path}/staffed-bed-changes`, body);
    const { outlookId } = reply.body as { outlookId: string };
    expect((await tonight()).outlook).toMatchObject({ id: outlookId, trigger: 'staffed beds changed' });
    expect((await tonight()).moved).toMatch(/^Acute at .* since the last outlook: its staffed beds were changed\.$/);
  });
});
