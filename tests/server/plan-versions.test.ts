import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import type { PlanVersion, RequiredBeds } from '../../shared/api/staffed-beds.ts';
import { bedsAt } from '../../shared/domain/bed-schedule.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { readStaffedBedSteps } from '../../server/database/read-staffed-beds.ts';
import { readStaffedThen } from '../../server/database/read-staffed-then.ts';
import { newId } from '../../server/database/new-id.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { BedChange } from '../../server/entities/BedChange.ts';
import { WeekOutlookRow } from '../../server/entities/WeekOutlookRow.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Wednesday, 20:00 in London (BST). */
const evening = Date.parse('2026-09-23T19:00:00Z') / 1000;
const hour = 3600;

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let charge: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = evening;
  const { database } = server.deps;
  built = await buildSite(database);
  const siteId = built.site.id;
  operations = await server.signedInAs(
    (await buildPerson(database, [{ role: 'operations', siteId }], 'Ola Manager')).id,
  );
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }])).id);
  path = `/api/sites/${siteId}`;
});

const faultsOf = (text: string) =>
  ((JSON.parse(text) as Problem).faults ?? []).map(({ at, message }) => `${at}: ${message}`);
const savePlan = (beds: number[], reason: string, more: object = {}) =>
  operations.send('put', `${path}/staffed-beds`, { ...flatPlan(built.areas, beds, reason), ...more });

describe('versions of the plan', () => {
  test('are listed newest first, and each is read as it was saved', async () => {
    await savePlan([14, 3], 'As every week');
    server.time.now += 60;
    await savePlan([15, 4], 'Winter');
    const { versions } = (await charge.get(`${path}/staffed-beds/versions`)).body as { versions: PlanVersion[] };
    expect(versions).toEqual([
      { version: 2, savedAt: evening + 60, savedBy: 'Ola Manager', reason: 'Winter' },
      { version: 1, savedAt: evening, savedBy: 'Ola Manager', reason: 'As every week' },
    ]);
    const first = (await charge.get(`${path}/staffed-beds/versions/1`)).body as {
      areas: { areaId: string; halfHours: number[] }[];
    };
    expect(first.areas.map(({ halfHours }) => halfHours[0]).sort()).toEqual([14, 3].sort());
    expect((await charge.get(`${path}/staffed-beds/versions/3`)).status).toBe(404);
    expect((await charge.get(`${path}/staffed-beds/versions/x`)).status).toBe(400);
  });

  test('one that rests on an older version is refused, and nothing is stored', async () => {
    expect((await savePlan([14, 3], 'As every week', { basedOnVersion: 0 })).body).toEqual({ version: 1 });
    const late = await savePlan([16, 3], 'Also first', { basedOnVersion: 0 });
    expect(late.status).toBe(409);
    expect(late.text).toContain('Ola Manager saved version 1 of the plan meanwhile.');
    expect((await savePlan([16, 3], 'On top', { basedOnVersion: 1 })).body).toEqual({ version: 2 });
    // Without saying what it rests on, it follows whatever is in force.
    expect((await savePlan([16, 3], 'Anyway')).body).toEqual({ version: 3 });
  });

  test('staffed beds of the past are those of the version in force then', async () => {
    await savePlan([14, 3], 'First');
    server.time.now = evening + 10 * hour;
    await savePlan([16, 4], 'Second');
    const { read } = server.deps.database;
    const [acute] = built.areas;
    const zone = makeZone('Europe/London');
    const steps = await readStaffedThen(read, built.site.id, zone, [acute.id], evening - hour, evening + 20 * hour);
    const at = (hours: number) => bedsAt(steps.get(acute.id)!, evening + hours * hour);
    expect([-1, 0, 9, 10, 19].map(at)).toEqual([14, 14, 14, 16, 16]);
  });
});

describe('dated exceptions', () => {
  const add = (body: object) => operations.send('post', `${path}/staffed-bed-exceptions`, body);
  const exception = () => ({
    areaId: built.areas[0].id,
    fromAt: evening + 24 * hour,
    untilAt: evening + 32 * hour,
    beds: 18,
    reason: 'Harbour fair',
  });

  test('hold in their time only, under a change made now, and are taken back', async () => {
    await savePlan([14, 3], 'As every week');
    expect((await add(exception())).status).toBe(201);
    const { read } = server.deps.database;
    const zone = makeZone('Europe/London');
    const [acute] = built.areas;
    const beds = async (hours: number) => {
      const steps = await readStaffedBedSteps(read, built.site.id, zone, [acute.id], evening, evening + 48 * hour);
      return bedsAt(steps!.get(acute.id)!, evening + hours * hour);
    };
    expect([await beds(23), await beds(24), await beds(31), await beds(32)]).toEqual([14, 18, 18, 14]);
    const [row] = await read.findBy(BedChange, { siteId: built.site.id });
    expect(row).toMatchObject({ kind: 'dated exception', madeBy: 'Ola Manager', blocked: 0 });
    expect((await operations.send('delete', `${path}/staffed-bed-exceptions/${row.id}`)).status).toBe(200);
    expect(await beds(24)).toBe(14);
    const events = await read.findBy(AuditEvent, { siteId: built.site.id });
    expect(events.map(({ event }) => event).slice(1)).toEqual([
      'staffed-beds.exception-added',
      'staffed-beds.exception-removed',
    ]);
  });

  test('one that has begun ends now and stays on record; one that has ended is not taken back', async () => {
    await savePlan([14, 3], 'As every week');
    const { changeId } = (await add({ ...exception(), fromAt: evening - hour })).body as { changeId: string };
    server.time.now += hour;
    expect((await operations.send('delete', `${path}/staffed-bed-exceptions/${changeId}`)).status).toBe(200);
    const kept = await server.deps.database.read.findOneByOrFail(BedChange, { id: changeId });
    expect(kept.untilAt).toBe(evening + hour);
    server.time.now += hour;
    expect((await operations.send('delete', `${path}/staffed-bed-exceptions/${changeId}`)).status).toBe(409);
  });

  test('are refused with every fault: too few, too many, past, too long, a person in the reason', async () => {
    expect(faultsOf((await add({ ...exception(), beds: 7, reason: 'For Mrs Olivia Fairweather' })).text)).toEqual([
      'Acute, beds: 7 is below the safe minimum of 8.',
      expect.stringMatching(/^reason: /),
    ]);
    expect(faultsOf((await add({ ...exception(), beds: 21 })).text)).toEqual([
      'Acute, beds: 21 is beyond the 20 bed spaces that exist.',
    ]);
    const past = { ...exception(), fromAt: evening - 2 * hour, untilAt: evening - hour };
    expect(faultsOf((await add(past)).text)).toEqual(['untilAt: This time has passed already.']);
    const bad = [
      { untilAt: evening },
      { untilAt: evening + 90 * 24 * hour },
      { beds: 501 },
      { beds: 2.5 },
      { reason: '' },
    ];
    for (const more of bad) expect((await add({ ...exception(), ...more })).status).toBe(400);
    expect((await add({ ...exception(), areaId: 'nothing' })).status).toBe(404);
    expect(await server.deps.database.read.countBy(BedChange, { siteId: built.site.id })).toBe(0);
  });

  test('a change made now is not taken back as an exception, nor is another site’s', async () => {
    await savePlan([14, 3], 'As every week');
    const change = {
      areaId: built.areas[0].id,
      beds: 15,
      blocked: 0,
      until: 'end of this shift',
      reason: 'Agency nurse',
    };
    const { changeId } = (await charge.send('post', `${path}/staffed-bed-changes`, change)).body as {
      changeId: string;
    };
    expect((await operations.send('delete', `${path}/staffed-bed-exceptions/${changeId}`)).status).toBe(404);
    const other = await buildSite(server.deps.database);
    const stranger = await server.signedInAs(
      (await buildPerson(server.deps.database, [{ role: 'operations', siteId: other.site.id }])).id,
    );
    const { changeId: mine } = (await add(exception())).body as { changeId: string };
    expect((await stranger.send('delete', `/api/sites/${other.site.id}/staffed-bed-exceptions/${mine}`)).status).toBe(
      404,
    );
  });
});

describe('required beds', () => {
  test('are not known before a week outlook, then those of its newest, without the shifts that are over', async () => {
    const required = async () => (await charge.get(`${path}/staffed-beds/required`)).body as RequiredBeds;
    expect(await required()).toEqual({ issuedAt: null, planningRisk: 0.1, areas: [] });
    const { database } = server.deps;
    const siteId = built.site.id;
    const modelId = newId();
    const shifts = [
      { name: 'Early', from: evening - 12 * hour, to: evening - 4 * hour },
      { name: 'Late', from: evening - 5 * hour, to: evening + hour },
    ];
    const need = (bedsToStaff: number) => ({ bedsToStaff, bedsThatDoNotExist: Math.max(0, bedsToStaff - 20) });
    const result = {
      planningRisk: 0.05,
      shifts,
      areas: [{ areaId: built.areas[0].id, need: [1, 2], shifts: [need(18), need(22)] }],
    };
    await database.write(async (manager) => {
      await manager.insert(ArrivalModelRow, {
        id: modelId,
        siteId,
        status: 'in use',
        createdAt: evening,
        fittedByPersonId: newId(),
        fittedBy: 'Test',
        engineVersion: 'test',
      });
      for (const [issuedAt, text] of [
        [evening - 60, result],
        [evening - 120, { ...result, planningRisk: 0.5 }],
      ] as const) {
        await manager.insert(WeekOutlookRow, {
          id: newId(),
          siteId,
          issuedAt,
          trigger: 'timetable',
          modelId,
          planVersion: 1,
          seed: 1,
          replications: 1,
          engineVersion: 'test',
          softwareVersion: 'test',
          computeMilliseconds: 1,
          standsOn: 'test',
          calendar: '[]',
          input: '{}',
          result: JSON.stringify(text),
          digest: 'test',
        });
      }
    });
    expect(await required()).toEqual({
      issuedAt: evening - 60,
      planningRisk: 0.05,
      areas: [
        {
          areaId: built.areas[0].id,
          shifts: [{ name: 'Late', from: shifts[1].from, to: shifts[1].to, beds: 22, doNotExist: 2 }],
        },
      ],
    });
  });
});
