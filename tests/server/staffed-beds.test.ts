import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import { bedsAt } from '../../shared/domain/bed-schedule.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { readStaffedBedSteps } from '../../server/database/read-staffed-beds.ts';
import { newId } from '../../server/database/new-id.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { BedChange } from '../../server/entities/BedChange.ts';
import { Shift } from '../../server/entities/Shift.ts';
import { StaffedBedPlan } from '../../server/entities/StaffedBedPlan.ts';
import type { staffedBeds } from '../../shared/api/staffed-beds.ts';
import type { z } from 'zod';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { flatPlan } from '../support/build-plan.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const utc = (text: string) => Date.parse(text) / 1000;
/** A Wednesday, 20:00 in London (BST, UTC+1): the Late shift. */
const evening = utc('2026-09-23T19:00:00Z');
const bedChanged = 'staffed-beds.changed-now';

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let charge: SignedIn;
let plans: string;
let changes: string;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = evening;
  const { database } = server.deps;
  built = await buildSite(database);
  const at = built.site.id;
  operations = await server.signedInAs(
    (await buildPerson(database, [{ role: 'operations', siteId: at }], 'Ola Manager')).id,
  );
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId: at }], 'Noor Charge')).id);
  plans = `/api/sites/${at}/staffed-beds`;
  changes = `/api/sites/${at}/staffed-bed-changes`;
});

const read = async () => (await charge.get(plans)).body as z.infer<typeof staffedBeds>;
const faultsOf = (text: string) =>
  ((JSON.parse(text) as Problem).faults ?? []).map(({ at, message }) => `${at}: ${message}`);

describe('the plan', () => {
  test('is saved whole as a new version, read back, and told of in the audit trail', async () => {
    expect(await read()).toEqual({ plan: null, changes: [] });
    const first = flatPlan(built.areas, [14, 3]);
    expect((await operations.send('put', plans, first)).body).toEqual({ version: 1 });
    const second = flatPlan(built.areas, [15, 4], 'Winter');
    second.areas[0].halfHours[335] = 20;
    server.time.now += 60;
    expect((await operations.send('put', plans, second)).body).toEqual({ version: 2 });
    const { plan } = await read();
    expect(plan).toMatchObject({ version: 2, savedAt: evening + 60, savedBy: 'Ola Manager', reason: 'Winter' });
    const byArea = (areas: { areaId: string; halfHours: number[] }[]) =>
      new Map(areas.map(({ areaId, halfHours }) => [areaId, halfHours]));
    expect(byArea(plan!.areas)).toEqual(byArea(second.areas));
    const where = { siteId: built.site.id, event: 'staffed-beds.plan-saved' };
    const events = await server.deps.database.read.find(AuditEvent, { where, order: { id: 'ASC' } });
    expect(events.map(({ actor, detail }) => [actor, detail])).toEqual([
      ['Ola Manager', '{"version":1}'],
      ['Ola Manager', '{"version":2}'],
    ]);
    // The earlier version is kept as it was.
    expect(await server.deps.database.read.countBy(StaffedBedPlan, { siteId: built.site.id })).toBe(2);
  });

  test('with faults is refused whole, every cell by day, time and area', async () => {
    const plan = flatPlan(built.areas, [14, 3]);
    plan.areas[0].halfHours[0] = 7;
    plan.areas[0].halfHours[2 * 48 + 45] = 21;
    plan.areas[1].halfHours[6 * 48 + 47] = 1;
    const reply = await operations.send('put', plans, plan);
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual([
      'Acute, Monday 00:00: 7 is below the safe minimum of 8.',
      'Acute, Wednesday 22:30: 21 is beyond the 20 bed spaces that exist.',
      'Resuscitation, Sunday 23:30: 1 is below the safe minimum of 2.',
    ]);
    expect((await read()).plan).toBeNull();
    expect(await server.deps.database.read.countBy(AuditEvent, { siteId: built.site.id })).toBe(0);
  });

  test('must name every care area of the site, once, and no other', async () => {
    const [acute, resuscitation] = flatPlan(built.areas, [14, 3]).areas;
    const send = async (areas: object[]) =>
      faultsOf((await operations.send('put', plans, { areas, reason: 'As every week' })).text);
    expect(await send([acute])).toEqual(['Resuscitation: The plan does not name this care area.']);
    expect(await send([acute, resuscitation, acute])).toEqual(['areas.2: Acute is named twice.']);
    const other = await buildSite(server.deps.database);
    const foreign = { ...acute, areaId: other.areas[0].id };
    expect(await send([acute, resuscitation, foreign])).toEqual([
      'areas.2: This care area does not belong to the site.',
    ]);
    expect((await read()).plan).toBeNull();
  });

  test('takes whole numbers for all 336 half hours and a reason, nothing else', async () => {
    const broken = (change: (plan: ReturnType<typeof flatPlan>) => void) => {
      const plan = flatPlan(built.areas, [14, 3]);
      change(plan);
      return operations.send('put', plans, plan);
    };
    const replies = [
      await broken((plan) => (plan.areas[0].halfHours[5] = 14.5)),
      await broken((plan) => (plan.areas[0].halfHours[5] = -1)),
      await broken((plan) => plan.areas[0].halfHours.pop()),
      await broken((plan) => (plan.areas = [])),
      await broken((plan) => (plan.reason = ' x ')),
    ];
    expect(replies.map(({ status }) => status)).toEqual([400, 400, 400, 400, 400]);
    expect(replies.map(({ text }) => faultsOf(text)[0])).toEqual([
      'areas.0.halfHours.5: Whole numbers only',
      'areas.0.halfHours.5: Not below 0',
      expect.stringMatching(/^areas\.0\.halfHours: /),
      expect.stringMatching(/^areas: /),
      'reason: Say why',
    ]);
  });

  test('is refused with a reason that could identify a person, without repeating it', async () => {
    const reply = await operations.send('put', plans, flatPlan(built.areas, [14, 3], 'For Mrs Olivia Fairweather'));
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual([
      'reason: The reason seems to hold a name. Say it without anything that identifies a person.',
    ]);
    expect(reply.text).not.toContain('Fairweather');
    expect((await read()).plan).toBeNull();
  });

  test('saved by two at once gives two versions', async () => {
    const replies = await Promise.all(
      [14, 15, 16].map((beds) => operations.send('put', plans, flatPlan(built.areas, [beds, 3]))),
    );
    expect(replies.map(({ body }) => (body as { version: number }).version).sort()).toEqual([1, 2, 3]);
  });
});

describe('a change for now', () => {
  const change = (more: object = {}) =>
    charge.send('post', changes, {
      areaId: built.areas[0].id,
      beds: 12,
      blocked: 2,
      until: 'end of this shift',
      reason: 'Two nurses ill',
      ...more,
    });
  async function untilOf(more: object = {}): Promise<string> {
    const reply = await change(more);
    expect(reply.status, reply.text).toBe(201);
    const { changeId } = reply.body as { changeId: string };
    const { untilAt } = await server.deps.database.read.findOneByOrFail(BedChange, { id: changeId });
    return new Date(untilAt * 1000).toISOString().slice(0, 16);
  }

  test('is stored with its audit row, shown until it expires, and lays itself over the plan', async () => {
    await operations.send('put', plans, flatPlan(built.areas, [14, 3]));
    const reply = await change();
    const { changeId, outlookId } = reply.body as { changeId: string; outlookId: string | null };
    expect(outlookId).toBeNull();
    // Late ends when Night begins, 21:00 in London.
    const ends = utc('2026-09-23T20:00:00Z');
    expect((await read()).changes).toEqual([
      {
        id: changeId,
        areaId: built.areas[0].id,
        fromAt: evening,
        untilAt: ends,
        beds: 12,
        blocked: 2,
        reason: 'Two nurses ill',
        kind: 'change now',
        madeBy: 'Noor Charge',
        madeAt: evening,
      },
    ]);
    const [event] = await server.deps.database.read.findBy(AuditEvent, { siteId: built.site.id, event: bedChanged });
    expect(event).toMatchObject({ subject: changeId, actor: 'Noor Charge' });
    // The note itself is not in the audit trail.
    expect(event.detail).not.toContain('nurses');

    const zone = makeZone('Europe/London');
    const { id } = built.areas[0];
    const steps = await readStaffedBedSteps(
      server.deps.database.read,
      built.site.id,
      zone,
      [id],
      evening - 60,
      ends + 60,
    );
    const beds = [evening - 1, evening, ends - 1, ends].map((at) => bedsAt(steps!.get(id)!, at));
    expect(beds).toEqual([14, 12, 12, 14]);

    server.time.now = ends - 1;
    expect((await read()).changes).toHaveLength(1);
    server.time.now = ends;
    expect((await read()).changes).toEqual([]);
  });

  test('a later one outranks an earlier one', async () => {
    await operations.send('put', plans, flatPlan(built.areas, [14, 3]));
    await change({ beds: 12, until: 'end of next shift' });
    server.time.now += 600;
    await change({ beds: 16 });
    const { id } = built.areas[0];
    const zone = makeZone('Europe/London');
    const steps = await readStaffedBedSteps(
      server.deps.database.read,
      built.site.id,
      zone,
      [id],
      evening,
      evening + 86_400,
    );
    const at = (text: string) => bedsAt(steps!.get(id)!, utc(text));
    expect(at('2026-09-23T19:05:00Z')).toBe(12);
    expect(at('2026-09-23T19:30:00Z')).toBe(16);
    expect(at('2026-09-23T20:30:00Z')).toBe(12);
    expect(at('2026-09-24T07:00:00Z')).toBe(14);
  });

  // Early 07:00–14:30, Late 14:00–21:30, Night 21:00–07:30, local time.
  test.each([
    ['in Late, until Night begins', '2026-09-23T19:00:00Z', 'end of this shift', '2026-09-23T20:00'],
    ['in Late, until Early begins', '2026-09-23T19:00:00Z', 'end of next shift', '2026-09-24T06:00'],
    [
      'in the overlap, the incoming shift is in charge',
      '2026-09-23T20:10:00Z',
      'end of this shift',
      '2026-09-24T06:00',
    ],
    ['in the overlap, next is the one after', '2026-09-23T20:10:00Z', 'end of next shift', '2026-09-24T13:00'],
    ['at the very start of a shift', '2026-09-23T06:00:00Z', 'end of this shift', '2026-09-23T13:00'],
    ['a second before it', '2026-09-23T05:59:59Z', 'end of this shift', '2026-09-23T06:00'],
    ['after midnight', '2026-09-24T02:00:00Z', 'end of this shift', '2026-09-24T06:00'],
    // Clocks in the UK: last Sunday of March and October at 01:00 UTC (Summer Time Order 2002).
    ['the night with a repeated hour is 11 h long', '2026-10-24T20:00:00Z', 'end of this shift', '2026-10-25T07:00'],
    ['within its repeated hour', '2026-10-25T01:30:00Z', 'end of this shift', '2026-10-25T07:00'],
    ['the night without an hour is 9 h long', '2027-03-27T21:00:00Z', 'end of this shift', '2027-03-28T06:00'],
    ['Late before it, until after it', '2027-03-27T20:00:00Z', 'end of next shift', '2027-03-28T06:00'],
  ])('made %s', async (_, at, until, expected) => {
    server.time.now = utc(at);
    expect(await untilOf({ until })).toBe(expected);
  });

  test('where two shifts start together, the next shift does not end as it begins', async () => {
    await server.deps.database.write((manager) =>
      manager.insert(Shift, {
        id: newId(),
        siteId: built.site.id,
        name: 'Long night',
        startMinute: 1260,
        endMinute: 540,
      }),
    );
    expect(await untilOf({ until: 'end of next shift' })).toBe('2026-09-24T06:00');
  });

  test('where no shift is set, says what to do', async () => {
    await server.deps.database.write((manager) => manager.delete(Shift, { siteId: built.site.id }));
    const reply = await change();
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual(['until: Set the site’s shifts first.']);
  });

  test('goes not below the safe minimum, nor beyond the bed spaces that exist less those blocked', async () => {
    expect(faultsOf((await change({ beds: 7, blocked: 0 })).text)).toEqual([
      'beds: Acute is never staffed below its safe minimum of 8.',
    ]);
    expect(faultsOf((await change({ beds: 18, blocked: 3 })).text)).toEqual([
      'beds: Acute has 20 bed spaces: 18 staffed and 3 blocked do not fit.',
    ]);
    expect((await change({ beds: 8, blocked: 12 })).status).toBe(201);
    expect((await change({ beds: 20, blocked: 0 })).status).toBe(201);
  });

  test('is refused with every fault at once, and nothing is stored', async () => {
    const reply = await change({ beds: 5, blocked: 16, reason: 'ask jo@people.example about bed 3' });
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.text)).toEqual([
      expect.stringContaining('do not fit'),
      expect.stringContaining('safe minimum'),
      'reason: The reason seems to hold an e-mail address. Say it without anything that identifies a person.',
    ]);
    expect(reply.text).not.toContain('jo@');
    for (const broken of [{ beds: 9.5 }, { beds: -1 }, { blocked: null }, { reason: '  ' }, { until: 'tomorrow' }]) {
      expect((await change(broken)).status, JSON.stringify(broken)).toBe(400);
    }
    expect(await server.deps.database.read.countBy(BedChange, { siteId: built.site.id })).toBe(0);
    expect(await server.deps.database.read.countBy(AuditEvent, { siteId: built.site.id, event: bedChanged })).toBe(0);
  });

  test('of another site’s area is not found', async () => {
    const other = await buildSite(server.deps.database);
    expect((await change({ areaId: other.areas[0].id })).status).toBe(404);
    expect((await change({ areaId: 'nothing' })).status).toBe(404);
  });
});
