import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import type { Census as CensusReply, CensusBody } from '../../shared/api/censuses.ts';
import type { Problem } from '../../shared/api/common.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Census } from '../../server/entities/Census.ts';
import { CensusArea } from '../../server/entities/CensusArea.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const now = 1_790_000_000;
const hour = 3600;
let server: TestServer;
let built: BuiltSite;
let charge: SignedIn;
let second: SignedIn;
let acute: string;
let resuscitation: string;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  vi.restoreAllMocks();
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database);
  [acute, resuscitation] = built.areas.map(({ id }) => id);
  const role = [{ role: 'charge' as const, siteId: built.site.id }];
  charge = await server.signedInAs((await buildPerson(database, role, 'Noor Charge')).id);
  second = await server.signedInAs((await buildPerson(database, role, 'Sam Second')).id);
});

const nothing = { areas: [], undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null };
const count = (areaId: string, present: number, waiting = 0, boarding = 0) => ({ areaId, present, waiting, boarding });
const enter = (body: Record<string, unknown>, who = charge) =>
  who.send('post', `/api/sites/${built.site.id}/censuses`, { takenAt: server.time.now, ...nothing, ...body });
const newest = async () => (await charge.get(`/api/sites/${built.site.id}/census`)).body as CensusReply;
const stored = () => server.deps.database.read.countBy(Census, { siteId: built.site.id });

async function expectRefused(body: Record<string, unknown>, ...faults: string[]) {
  const reply = await enter(body);
  expect(reply.status, JSON.stringify(body)).toBe(400);
  const told = (JSON.parse(reply.text) as Problem).faults ?? [];
  expect(told.map(({ at, message }) => `${at}: ${message}`)).toEqual(faults);
  expect(await stored()).toBe(0);
  expect(await server.deps.database.read.countBy(AuditEvent, { siteId: built.site.id })).toBe(0);
}

describe('a census', () => {
  test('is stored with its audit row, and read back', async () => {
    const reply = await enter({
      areas: [count(acute, 17, 5, 3), count(resuscitation, 0)],
      undecidedWaiting: 4,
      ambulancesHolding: 2,
      arrivalsSinceMidnight: 61,
    });
    expect(reply.status).toBe(201);
    expect(reply.body).toEqual({
      censusId: expect.any(String) as string,
      outlookId: null,
      reason: expect.stringContaining('no arrival model is in use') as string,
    });
    const read = await newest();
    expect(read.areas.sort((a, b) => b.present - a.present)).toEqual([
      { ...count(acute, 17, 5, 3), takenAt: now, enteredBy: 'Noor Charge' },
      { ...count(resuscitation, 0), takenAt: now, enteredBy: 'Noor Charge' },
    ]);
    expect(read.undecided).toEqual({ takenAt: now, waiting: 4, ambulancesHolding: 2 });
    expect(read.arrivalsSinceMidnight).toEqual({ takenAt: now, count: 61 });
    const [event] = await server.deps.database.read.findBy(AuditEvent, { siteId: built.site.id });
    expect(event).toMatchObject({
      event: 'census.entered',
      actor: 'Noor Charge',
      subject: (reply.body as { censusId: string }).censusId,
      at: now,
      requestId: reply.headers['x-request-id'],
    });
  });

  test('is not stored if its audit row cannot be', async () => {
    const { write } = server.deps.database;
    vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    await write((manager) =>
      manager.query(
        `CREATE TRIGGER no_audit BEFORE INSERT ON audit_event BEGIN SELECT RAISE(ABORT, 'no audit row'); END`,
      ),
    );
    try {
      expect((await enter({ areas: [count(acute, 3)] })).status).toBe(500);
    } finally {
      await write((manager) => manager.query('DROP TRIGGER no_audit'));
    }
    expect(await stored()).toBe(0);
    expect(await server.deps.database.read.countBy(CensusArea, { areaId: acute })).toBe(0);
    expect((await enter({ areas: [count(acute, 3)] })).status).toBe(201);
  });

  test('stays stored when the outlook after it cannot be computed, and says so', async () => {
    const log = vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    const issue = vi.spyOn(server.issuer, 'issue').mockRejectedValue(new Error('threads gone'));
    try {
      const reply = await enter({ areas: [count(acute, 3)] });
      expect(reply.status).toBe(201);
      expect(reply.body).toMatchObject({
        outlookId: null,
        reason: expect.stringContaining('the last one stands') as string,
      });
      expect(log).toHaveBeenCalledOnce();
    } finally {
      issue.mockRestore();
      log.mockRestore();
    }
    expect((await newest()).areas).toHaveLength(1);
  });

  test('may leave areas out, or hold one figure alone', async () => {
    expect((await enter({ areas: [count(acute, 3)] })).status).toBe(201);
    expect((await enter({ undecidedWaiting: 0 })).status).toBe(201);
    expect((await enter({ arrivalsSinceMidnight: 12 })).status).toBe(201);
    expect((await newest()).areas.map(({ areaId }) => areaId)).toEqual([acute]);
  });

  test('more present than bed spaces is no fault: need may exceed beds', async () => {
    expect((await enter({ areas: [count(resuscitation, 9, 5)] })).status).toBe(201);
  });
});

describe('a census that cannot be is refused whole, every fault with its place', () => {
  test.each([
    ['negative', { boarding: -1 }, 'areas.0.boarding: Not below 0'],
    ['fractional', { waiting: 1.5 }, 'areas.0.waiting: Whole numbers only'],
    ['enormous', { present: 2001 }, 'areas.0.present: At most 2000'],
    [
      'waiting and boarding above present',
      { present: 4, waiting: 3, boarding: 2 },
      'areas.0.present: Waiting and boarding together cannot exceed present',
    ],
  ])('%s', async (_, change, fault) => {
    await expectRefused({ areas: [{ ...count(acute, 5), ...change }, count(resuscitation, 1)] }, fault);
  });

  test('a figure that is text or missing', async () => {
    const reply = await enter({ areas: [{ areaId: acute, present: '5', boarding: 0 }] });
    expect(reply.status).toBe(400);
    const faults = (JSON.parse(reply.text) as Problem).faults ?? [];
    expect(faults.map(({ at }) => at).sort()).toEqual(['areas.0.present', 'areas.0.waiting']);
    expect(await stored()).toBe(0);
  });

  test('from the future, beyond what two clocks may differ by', async () => {
    await expectRefused(
      { takenAt: now + 121, areas: [count(acute, 5)] },
      'takenAt: The census is dated in the future. Check the clock of this workstation.',
    );
  });

  test('of a clock a little ahead: taken now, never later', async () => {
    expect((await enter({ takenAt: now + 120, areas: [count(acute, 5)] })).status).toBe(201);
    expect((await newest()).areas[0].takenAt).toBe(now);
  });

  test('more than 8 h old', async () => {
    await expectRefused(
      { takenAt: now - 8 * hour - 1, areas: [count(acute, 5)] },
      'takenAt: The census is more than 8 h old. Count again and enter what is there now.',
    );
  });

  test('of an area that is unknown, or another site’s', async () => {
    const other = await buildSite(server.deps.database);
    await expectRefused(
      { areas: [count('nothing', 5), count(acute, 2), count(other.areas[0].id, 1)] },
      'areas.0.areaId: This care area does not belong to the site.',
      'areas.2.areaId: This care area does not belong to the site.',
    );
  });

  test('with an area twice', async () => {
    await expectRefused({ areas: [count(acute, 5), count(acute, 6)] }, 'areas: Each area once');
  });

  test('empty', async () => {
    await expectRefused({}, 'areas: Enter at least one figure');
    await expectRefused({ ambulancesHolding: 0 }, 'areas: Enter at least one figure');
  });

  test('more ambulances holding than wait undecided', async () => {
    const fault =
      'ambulancesHolding: Ambulances holding are part of those waiting with no area decided: there cannot be more.';
    await expectRefused({ undecidedWaiting: 1, ambulancesHolding: 2 }, fault);
    await expectRefused({ areas: [count(acute, 5)], ambulancesHolding: 1 }, fault);
  });

  test('faults of several kinds are listed together', async () => {
    await expectRefused(
      { takenAt: now + 9999, areas: [count('nothing', 5)], undecidedWaiting: 0, ambulancesHolding: 1 },
      'takenAt: The census is dated in the future. Check the clock of this workstation.',
      'areas.0.areaId: This care area does not belong to the site.',
      'ambulancesHolding: Ambulances holding are part of those waiting with no area decided: there cannot be more.',
    );
  });
});

describe('the newest count of each area', () => {
  const presentAndAge = async () =>
    Object.fromEntries(
      (await newest()).areas.map((area) => [area.areaId, [area.present, server.time.now - area.takenAt]]),
    );
  const enterAt = async (takenAt: number, areas: CensusBody['areas'], who = charge) => {
    expect((await enter({ takenAt, areas }, who)).status).toBe(201);
  };

  test('holds, whoever entered it and whatever else they counted: two nurses both keep theirs', async () => {
    await enterAt(now - 1800, [count(acute, 10), count(resuscitation, 1)]);
    await Promise.all([enterAt(now - 60, [count(acute, 12)]), enterAt(now - 30, [count(resuscitation, 3)], second)]);
    expect(await presentAndAge()).toEqual({ [acute]: [12, 60], [resuscitation]: [3, 30] });
    expect((await newest()).areas.find(({ areaId }) => areaId === resuscitation)?.enteredBy).toBe('Sam Second');
    expect(await stored()).toBe(3);
  });

  test('is by when it was counted, not by when it was entered', async () => {
    await enterAt(now - 600, [count(acute, 12)]);
    await enterAt(now - 1200, [count(acute, 9)]);
    expect(await presentAndAge()).toEqual({ [acute]: [12, 600] });
  });

  test('of two counted at one time, the one saved later holds', async () => {
    await enterAt(now - 600, [count(acute, 12)]);
    await enterAt(now - 600, [count(acute, 13)]);
    expect(await presentAndAge()).toEqual({ [acute]: [13, 600] });
    server.time.now += 60;
    await enterAt(now - 600, [count(acute, 11)]);
    expect(await presentAndAge()).toEqual({ [acute]: [11, 660] });
  });

  test('is dropped after 8 h, area by area', async () => {
    await enterAt(now - 3600, [count(acute, 10)]);
    await enter({ takenAt: now, areas: [count(resuscitation, 2)], undecidedWaiting: 1, arrivalsSinceMidnight: 5 });
    server.time.now = now + 7 * hour - 1;
    expect(await presentAndAge()).toEqual({ [acute]: [10, 8 * hour - 1], [resuscitation]: [2, 7 * hour - 1] });
    server.time.now = now + 7 * hour;
    expect(await presentAndAge()).toEqual({ [resuscitation]: [2, 7 * hour] });
    server.time.now = now + 8 * hour;
    expect(await newest()).toEqual({ areas: [], undecided: null, arrivalsSinceMidnight: null });
  });

  test('undecided and arrivals each keep their own newest time', async () => {
    await enter({ takenAt: now - 900, undecidedWaiting: 6, ambulancesHolding: 1 });
    await enter({ takenAt: now - 300, arrivalsSinceMidnight: 40 });
    expect(await newest()).toEqual({
      areas: [],
      undecided: { takenAt: now - 900, waiting: 6, ambulancesHolding: 1 },
      arrivalsSinceMidnight: { takenAt: now - 300, count: 40 },
    });
  });

  test('is of its own site', async () => {
    await enterAt(now, [count(acute, 10)]);
    const other = await buildSite(server.deps.database);
    const stranger = await server.signedInAs(
      (await buildPerson(server.deps.database, [{ role: 'charge', siteId: other.site.id }])).id,
    );
    expect(((await stranger.get(`/api/sites/${other.site.id}/census`)).body as CensusReply).areas).toEqual([]);
  });
});
