import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import type { Acknowledgement as Reply } from '../../shared/api/acknowledgements.ts';
import type { NightLog } from '../../shared/api/night-log.ts';
import type { Outlook, OutlookThen, Tonight } from '../../shared/api/outlooks.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { hoursOfTonight } from '../../shared/forecasting/tonight-span.ts';
import { Acknowledgement } from '../../server/entities/Acknowledgement.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import type { CareArea } from '../../server/entities/CareArea.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Monday, 20:13:20 in London (BST, UTC+1): the night shift starts at 21:00. */
const now = Date.parse('2026-09-21T19:13:20Z') / 1000;
const hour = 3600;
let server: TestServer;
let fitted: ArrivalModelRow;
let built: BuiltSite;
let acute: CareArea;
let resuscitation: CareArea;
let charge: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now, config: { threads: 2 } });
  fitted = await fitModel(server, await buildSite(server.deps.database), 10);
});
afterAll(() => server.close());
beforeEach(async () => {
  vi.restoreAllMocks();
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database);
  [acute, resuscitation] = built.areas;
  const siteId = built.site.id;
  path = `/api/sites/${siteId}`;
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }], 'Noor Charge')).id);
  const operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }])).id);
  await giveModel(database, fitted, built);
  expect((await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [14, 3]))).status).toBe(200);
});

const count = (area: CareArea, present: number) => ({ areaId: area.id, present, waiting: 0, boarding: 0 });
async function enter(acutePresent: number, resuscitationPresent = 0): Promise<string> {
  const reply = await charge.send('post', `${path}/censuses`, {
    takenAt: server.time.now,
    areas: [count(acute, acutePresent), count(resuscitation, resuscitationPresent)],
    undecidedWaiting: null,
    ambulancesHolding: null,
    arrivalsSinceMidnight: null,
  });
  expect(reply.status, reply.text).toBe(201);
  return (reply.body as { outlookId: string }).outlookId;
}
const acknowledge = (outlookId: string, note = 'Site manager called', areaId = acute.id) =>
  charge.send('post', `${path}/acknowledgements`, { areaId, outlookId, note });
const tonight = async () => (await charge.get(`${path}/tonight`)).body as Tonight;
const log = async (at?: number) =>
  (await charge.get(`${path}/night-log${at === undefined ? '' : `?at=${String(at)}`}`)).body as NightLog;
const then = async (id: string) => (await charge.get(`${path}/outlooks/${id}/then`)).body as OutlookThen;
const outlook = async (id: string) => (await charge.get(`${path}/outlooks/${id}`)).body as Outlook;
const stored = () => server.deps.database.read.countBy(Acknowledgement, { siteId: built.site.id });

describe('acknowledging a risk', () => {
  test('speaks of the hours past the limit tonight in the outlook looked at, and leaves an audit row', async () => {
    const id = await enter(30);
    server.time.now += 60;
    const reply = await acknowledge(id);
    expect(reply.status, reply.text).toBe(201);
    const { result } = await outlook(id);
    // Acute has 20 spaces: its printed chance is that at the full hour.
    const expected = hoursOfTonight(result, server.time.now, makeZone('Europe/London'))
      .filter((index) => result.areas[0].shortfall[index].chance > acute.alertLimit)
      .map((index) => result.hours[index]);
    expect(expected.length).toBeGreaterThan(0);
    const made = reply.body as Reply;
    expect(made).toEqual({
      id: expect.any(String) as string,
      areaId: acute.id,
      outlookId: id,
      fromAt: expected[0],
      untilAt: expected.at(-1),
      hours: expected,
      note: 'Site manager called',
      by: 'Noor Charge',
      at: now + 60,
    });
    expect((await tonight()).acknowledgements).toEqual([made]);
    const event = await server.deps.database.read.findOneByOrFail(AuditEvent, { subject: made.id });
    expect(event).toMatchObject({ event: 'risk.acknowledged', actor: 'Noor Charge', siteId: built.site.id });
    // The note is kept with the acknowledgement alone.
    expect(event.detail).not.toContain('manager');
  });

  test('is not stored if its audit row cannot be', async () => {
    const id = await enter(30);
    vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    const { write } = server.deps.database;
    await write((manager) =>
      manager.query(
        `CREATE TRIGGER no_audit BEFORE INSERT ON audit_event WHEN NEW.event = 'risk.acknowledged' BEGIN SELECT RAISE(ABORT, 'full'); END`,
      ),
    );
    expect((await acknowledge(id)).status).toBe(500);
    await write((manager) => manager.query('DROP TRIGGER no_audit'));
    expect(await stored()).toBe(0);
  });

  test.each([
    ['a name', 'Moved Mr Smith to the ward'],
    ['a telephone number', 'Rang 020 7946 0958 twice'],
  ])('refuses a note that holds %s, and stores nothing', async (kind, note) => {
    const reply = await acknowledge(await enter(30), note);
    expect(reply.status).toBe(400);
    expect(reply.text).toContain(`seems to hold ${kind}`);
    expect(await stored()).toBe(0);
  });

  test('refuses an empty note, an area under its limit, an outlook or area of elsewhere', async () => {
    const id = await enter(30, 0);
    expect((await acknowledge(id, '  ')).status).toBe(400);
    const other = await buildSite(server.deps.database);
    expect((await acknowledge(id, 'Site manager called', other.areas[0].id)).status).toBe(404);
    expect((await acknowledge('nothing')).status).toBe(404);
    server.time.now += 60;
    const quiet = await acknowledge(await enter(0, 0));
    expect(quiet.status).toBe(409);
    expect(quiet.text).toContain('Acute is past its limit at no hour of tonight');
    expect(await stored()).toBe(0);
  });
});

describe('the night log', () => {
  test('holds what was done, in time order, each with the outlook that followed', async () => {
    const first = await enter(30, 1);
    server.time.now += 300;
    expect((await acknowledge(first)).status).toBe(201);
    server.time.now += 300;
    const change = await charge.send('post', `${path}/staffed-bed-changes`, {
      areaId: acute.id,
      beds: 16,
      blocked: 1,
      until: 'end of this shift',
      reason: 'Two bays opened',
    });
    expect(change.status, change.text).toBe(201);
    const { night, entries } = await log();
    expect(night).toEqual({
      date: '2026-09-21',
      from: Date.parse('2026-09-21T20:00Z') / 1000,
      to: Date.parse('2026-09-22T06:30Z') / 1000,
      since: Date.parse('2026-09-21T06:30Z') / 1000,
    });
    expect(entries).toEqual([
      expect.objectContaining({
        kind: 'census',
        at: now,
        takenAt: now,
        by: 'Noor Charge',
        outlookId: first,
        areas: [count(acute, 30), count(resuscitation, 1)],
        undecidedWaiting: null,
      }),
      expect.objectContaining({
        kind: 'acknowledgement',
        at: now + 300,
        areaId: acute.id,
        outlookId: first,
        note: 'Site manager called',
      }),
      expect.objectContaining({
        kind: 'staffed beds',
        at: now + 600,
        areaId: acute.id,
        beds: 16,
        blocked: 1,
        // The late shift is in charge until the night shift comes at 21:00.
        untilAt: Date.parse('2026-09-21T20:00Z') / 1000,
        reason: 'Two bays opened',
        outlookId: (change.body as { outlookId: string }).outlookId,
      }),
    ]);
  });

  test('is read through the night and not after it; asked for by any of its instants later', async () => {
    await enter(12);
    server.time.now = now + 10 * hour;
    expect((await log()).entries).toHaveLength(1);
    server.time.now = Date.parse('2026-09-22T06:30Z') / 1000;
    expect((await log()).entries).toEqual([]);
    expect((await log(server.time.now - 1)).entries).toHaveLength(1);
    expect((await log(now)).night.date).toBe('2026-09-21');
  });

  test('has nothing of another site', async () => {
    await enter(12);
    const { database } = server.deps;
    const other = await buildSite(database);
    const stranger = await server.signedInAs(
      (await buildPerson(database, [{ role: 'charge', siteId: other.site.id }])).id,
    );
    const reply = (await stranger.get(`/api/sites/${other.site.id}/night-log`)).body as NightLog;
    expect(reply.entries).toEqual([]);
  });

  test('refuses an instant that is none', async () => {
    expect((await charge.get(`${path}/night-log?at=yesterday`)).status).toBe(400);
  });
});

describe('back in time', () => {
  test('outlooks are listed by their time, and refused beyond eight days', async () => {
    const first = await enter(12);
    server.time.now += 600;
    const second = await enter(13);
    const list = async (from: number, to: number) =>
      charge.get(`${path}/outlooks?from=${String(from)}&to=${String(to)}`);
    const { outlooks } = (await list(now, now + 601)).body as { outlooks: { id: string }[] };
    // The plan's own outlook came first.
    expect(outlooks.map(({ id }) => id).slice(-2)).toEqual([first, second]);
    expect(outlooks).toHaveLength(3);
    expect(outlooks.at(-1)).toEqual({ id: second, issuedAt: now + 600, trigger: 'census saved' });
    expect(((await list(now + 600, now + 601)).body as { outlooks: unknown[] }).outlooks).toHaveLength(1);
    expect((await list(now, now)).status).toBe(400);
    expect((await list(now - 9 * 86_400, now)).status).toBe(400);
  });

  test('an earlier outlook comes as issued, with its neighbours, what was counted since, and what was acknowledged', async () => {
    const first = await enter(30, 1);
    server.time.now = now + 60;
    await acknowledge(first);
    // 22:00 in London.
    server.time.now = Date.parse('2026-09-21T21:00Z') / 1000;
    const second = await enter(17, 2);
    server.time.now += 1800;
    const reply = await then(first);
    expect(reply.outlook).toEqual(await outlook(first));
    expect(reply.later).toMatchObject({ id: second, trigger: 'census saved' });
    expect(reply.earlier).toMatchObject({ trigger: 'staffed beds changed' });
    expect(reply.acknowledgements.map(({ note }) => note)).toEqual(['Site manager called']);
    expect((await then(second)).later).toBeNull();
    expect((await then(second)).acknowledgements).toEqual([]);
    const at22 = reply.past.find(({ at }) => at === Date.parse('2026-09-21T21:00Z') / 1000);
    expect(at22?.areas).toEqual([
      { areaId: acute.id, present: 17, staffed: 14, source: 'census' },
      { areaId: resuscitation.id, present: 2, staffed: 3, source: 'census' },
    ]);
    // Nothing of what is still to come, and half a day of what came before.
    expect(reply.past.at(-1)?.at).toBe(Date.parse('2026-09-21T21:00Z') / 1000);
    expect(reply.past[0].at).toBeLessThanOrEqual(now - 11 * hour);
    expect((await charge.get(`${path}/outlooks/nothing/then`)).status).toBe(404);
  });

  test('when all its hours have passed, the log speaks for no later ones', async () => {
    const first = await enter(12);
    server.time.now = now + 60 * hour;
    const { past, outlook: issued } = await then(first);
    expect(past.at(-1)?.at).toBe(issued.result.hours.at(-1));
  });

  test('last night is the outlook that stood when the night before this one began', async () => {
    const first = await enter(12);
    expect((await tonight()).lastNight).toBeNull();
    // Tuesday 10:00 in London: last night began on Monday at 21:00.
    server.time.now = Date.parse('2026-09-22T09:00Z') / 1000;
    await enter(13);
    expect((await tonight()).lastNight).toEqual({ outlookId: first, issuedAt: now });
    // Wednesday 10:00: at Tuesday's 21:00 that of 10:00 had stood for eleven hours.
    server.time.now += 24 * hour;
    const [latest] = (
      (await charge.get(`${path}/outlooks?from=${String(server.time.now - 25 * hour)}&to=${String(server.time.now)}`))
        .body as { outlooks: { id: string; issuedAt: number }[] }
    ).outlooks.slice(-1);
    expect((await tonight()).lastNight).toEqual({ outlookId: latest.id, issuedAt: latest.issuedAt });
  });
});
