import ICAL from 'ical.js';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { readCalendarFeed, type CalendarFeed } from '../../shared/api/calendar-feeds.ts';
import type { Problem } from '../../shared/api/common.ts';
import { newId } from '../../server/database/new-id.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { CalendarFeed as FeedRow } from '../../server/entities/CalendarFeed.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import { WeekOutlookRow } from '../../server/entities/WeekOutlookRow.ts';
import { readingsAMinute } from '../../server/features/calendar-feeds/routes.ts';
import { engineVersion } from '../../shared/forecasting/engine-version.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const utc = (text: string) => Date.parse(text) / 1000;
/** A Saturday, the evening before the clocks go back in London (25 October 2026, 02:00 BST → 01:00 GMT). */
const now = utc('2026-10-24T17:00:00Z');
/** That night, 21:00 to 07:30 in London: BST at its start, GMT at its end. */
const night = { name: 'Night', from: utc('2026-10-24T20:00:00Z'), to: utc('2026-10-25T07:30:00Z') };
const late = { name: 'Late', from: utc('2026-10-25T14:00:00Z'), to: utc('2026-10-25T21:30:00Z') };

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let path: string;
let model: { id: string };

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database, { name: 'Saltby; Bay, north' });
  const siteId = built.site.id;
  path = `/api/sites/${siteId}/calendar-feeds`;
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }], 'Ola')).id);
  const row = {
    siteId,
    createdAt: 1,
    fittedByPersonId: 'x',
    fittedBy: 'Test',
    engineVersion,
    status: 'retired' as const,
  };
  model = await database.write((manager) => manager.save(manager.create(ArrivalModelRow, { ...row, id: newId() })));
});

const common = (issuedAt: number) => ({
  id: newId(),
  siteId: built.site.id,
  issuedAt,
  trigger: 'timetable',
  modelId: model.id,
  seed: 1,
  replications: 1,
  engineVersion,
  softwareVersion: '0',
  computeMilliseconds: 0,
  input: '{}',
  digest: '',
});

/** A week outlook as a row alone, with what the feed reads of it: the two shifts of both areas. */
async function giveWeek(issuedAt: number, chances: [night: number, late: number][]): Promise<void> {
  const areas = built.areas.map(({ id }, a) => ({
    areaId: id,
    counted: a === 0,
    shifts: chances[a].map((someTime) => ({
      someTime,
      bedsToAdd: 3,
      bedsThatDoNotExist: 1,
      lastChanceAt: utc('2026-10-24T18:30:00Z'),
    })),
  }));
  const result = JSON.stringify({ planningRisk: 0.1, shifts: [night, late], areas });
  const more = { planVersion: 1, standsOn: '', calendar: '[]' };
  await server.deps.database.write((manager) =>
    manager.insert(WeekOutlookRow, { ...common(issuedAt), ...more, result }),
  );
}

/** An outlook of Tonight until an hour, likewise. */
async function giveTonight(issuedAt: number, until: number, chance: number): Promise<void> {
  const shifts = [{ ...night, someTime: { chance, se: 0.01 } }];
  const areas = [{ areaId: built.areas[0].id, counted: true, shifts }];
  const result = JSON.stringify({ hours: [until], areas });
  await server.deps.database.write((manager) => manager.insert(OutlookRow, { ...common(issuedAt), result }));
}

async function make(name = 'Bed meeting calendar'): Promise<{ feed: CalendarFeed; address: string }> {
  const reply = await operations.send('post', path, { name });
  expect(reply.status, reply.text).toBe(201);
  return reply.body as { feed: CalendarFeed; address: string };
}
const read = (address: string) => {
  const { pathname, search } = new URL(address);
  return server.nobody().get(`${pathname}${search}`);
};
async function events(address: string): Promise<ICAL.Event[]> {
  const reply = await read(address);
  expect(reply.status, reply.text).toBe(200);
  const calendar = new ICAL.Component(ICAL.parse(reply.text) as unknown[]);
  return calendar.getAllSubcomponents('vevent').map((one) => new ICAL.Event(one));
}
const secondsOf = (time: ICAL.Time) => time.toUnixTime();

describe('the feed', () => {
  test('is what a calendar program can read: one event a shift past the limit, in UTC across the clock change', async () => {
    await giveWeek(now - 3600, [
      [0.64, 0.2],
      [0.01, 0.31],
    ]);
    const { address } = await make();
    const [first, second, ...rest] = await events(address);
    expect(rest).toEqual([]);
    expect(first.summary).toBe('Acute, Night: 64 % chance of shortfall (Likely)');
    expect([secondsOf(first.startDate), secondsOf(first.endDate)]).toEqual([night.from, night.to]);
    expect(first.startDate.zone).toBe(ICAL.Timezone.utcTimezone);
    expect(first.location).toBe('Saltby; Bay, north');
    expect(second.summary).toBe('Resuscitation, Late: 31 % chance of shortfall (Possible)');
    expect(first.description.split('\n').slice(0, 4)).toEqual([
      'Chance of any shortfall during the shift: 64 % (Likely). The area’s limit is 25 %.',
      'To meet the planning risk of 10 %: 3 beds more, of which 1 does not exist.',
      'Last chance to book: Sat 19:30 (2026-10-24).',
      'Forecast issued Sat 17:00 (2026-10-24); times are the site’s.',
    ]);
    expect(first.description).toContain('Planning aid. Not for decisions about any individual patient.');
    expect(first.description).toContain('is not a reason to staff below your safe minimum');
    expect(second.description).toContain('Not counted: the forecast stands on no census of this area.');
  });

  // Source: RFC 5545, 3.1 (lines of at most 75 octets, CRLF, folded before a space), 3.3.11 (escapes), 3.6 and 3.8.
  test('keeps to the letter of RFC 5545: folding, escapes, line ends, what every event must have', async () => {
    await giveWeek(now, [
      [0.64, 0.2],
      [0.01, 0.01],
    ]);
    const { address } = await make();
    const reply = await read(address);
    expect(reply.headers['content-type']).toBe('text/calendar; charset=utf-8');
    expect(reply.text.replaceAll('\r\n', '')).not.toMatch(/[\r\n]/);
    const lines = reply.text.split('\r\n');
    for (const line of lines) expect(Buffer.byteLength(line), line).toBeLessThanOrEqual(75);
    expect(lines.some((line) => line.startsWith(' '))).toBe(true);
    const unfolded = reply.text.replaceAll('\r\n ', '');
    expect(unfolded).toContain('LOCATION:Saltby\\; Bay\\, north\r\n');
    expect(unfolded).toContain('DTSTART:20261024T200000Z\r\n');
    expect(unfolded).toContain('DTEND:20261025T073000Z\r\n');
    expect(unfolded).toContain('DTSTAMP:20261024T170000Z\r\n');
    expect(unfolded).toMatch(/^BEGIN:VCALENDAR\r\nVERSION:2\.0\r\nPRODID:-\/\/Shoalmark\/\/[^\r]*\r\n/);
    for (const needed of ['METHOD:PUBLISH', 'REFRESH-INTERVAL;VALUE=DURATION:PT1H', 'TRANSP:TRANSPARENT']) {
      expect(unfolded).toContain(`${needed}\r\n`);
    }
    expect(unfolded).toContain('individual patient. Follow your hospital’s clinical governance\\, escalation');
  });

  test('keeps a shift’s UID from forecast to forecast; its sequence grows and its stamp is the forecast’s', async () => {
    await giveWeek(now - 7200, [
      [0.64, 0.2],
      [0.01, 0.01],
    ]);
    const { address } = await make();
    const [before] = await events(address);
    await giveWeek(now, [
      [0.51, 0.2],
      [0.01, 0.01],
    ]);
    const [after] = await events(address);
    expect(after.uid).toBe(before.uid);
    expect(after.sequence).toBe(before.sequence + 120);
    expect(after.summary).toContain('51 %');
    const stamp = after.component.getFirstPropertyValue('dtstamp') as ICAL.Time;
    expect(secondsOf(stamp)).toBe(now);
  });

  test('takes a newer outlook of Tonight for shifts that it reaches the end of, and no other', async () => {
    await giveWeek(now - 7200, [
      [0.64, 0.4],
      [0.01, 0.01],
    ]);
    const { address } = await make();
    await giveTonight(now - 600, night.to - 3600, 0.1);
    expect((await events(address)).map(({ summary }) => summary.slice(0, 17))).toEqual([
      'Acute, Night: 64 ',
      'Acute, Late: 40 %',
    ]);
    await giveTonight(now, night.to, 0.1);
    expect((await events(address)).map(({ summary }) => summary.slice(0, 17))).toEqual(['Acute, Late: 40 %']);
    server.time.now = night.from;
    expect((await events(address))[0].description).toContain('Last chance to book has passed: Sat 19:30');
    // What has passed is left out.
    server.time.now = late.to;
    expect((await events(address)).map(({ summary }) => summary.slice(0, 5))).toEqual(['Saltb']);
  });

  test('never stays silent: no forecast, an old one and a calm one each say so on a whole day', async () => {
    const { address } = await make();
    const only = async () => {
      const [event, ...rest] = await events(address);
      expect(rest).toEqual([]);
      expect(event.startDate.isDate).toBe(true);
      expect(event.startDate.toString()).toBe('2026-10-24');
      return event.summary;
    };
    expect(await only()).toBe('Saltby; Bay, north: no forecast, so this calendar knows nothing');
    await giveWeek(now - 13 * 3600, [
      [0.01, 0.01],
      [0.01, 0.01],
    ]);
    expect(await only()).toBe('Saltby; Bay, north: the forecast is old, do not rely on this calendar');
    await giveWeek(now, [
      [0.25, 0.01],
      [0.01, 0.01],
    ]);
    // At the limit is not past it.
    expect(await only()).toBe('Saltby; Bay, north: no shift past its limit in the newest forecast');
  });
});

describe('its address', () => {
  test('is shown once, stored as a digest, and listed without its secret', async () => {
    const { feed, address } = await make();
    expect(address).toMatch(/^http:\/\/127\.0\.0\.1:4310\/api\/calendar-feed\.ics\?secret=[\w-]{43}$/);
    const secret = new URL(address).searchParams.get('secret')!;
    const row = await server.deps.database.read.findOneByOrFail(FeedRow, { id: feed.id });
    expect(JSON.stringify(row)).not.toContain(secret);
    expect((await operations.get(path)).text).not.toContain(secret);
    const [made] = await server.deps.database.read.findBy(AuditEvent, { subject: feed.id });
    expect([made.event, made.detail]).toEqual(['calendar-feed.made', '{"name":"Bed meeting calendar"}']);
  });

  test('answers 404 to a wrong secret, to none, and once revoked; a reading is noted', async () => {
    const { feed, address } = await make();
    for (const wrong of ['', '?secret=', `?secret=${'a'.repeat(43)}`, `?secret=${feed.id}`]) {
      const reply = await server.nobody().get(`${readCalendarFeed.path}${wrong}`);
      expect([reply.status, (JSON.parse(reply.text) as Problem).detail]).toEqual([
        404,
        'This calendar feed was not found.',
      ]);
    }
    expect((await read(address)).status).toBe(200);
    const feeds = async () => ((await operations.get(path)).body as { feeds: CalendarFeed[] }).feeds;
    expect((await feeds())[0]).toMatchObject({ lastReadAt: now, revokedAt: null });
    server.time.now += 10;
    expect((await operations.send('post', `${path}/${feed.id}/revocation`)).status).toBe(200);
    expect((await feeds())[0]).toMatchObject({ revokedAt: now + 10 });
    expect((await read(address)).status).toBe(404);
    expect((await operations.send('post', `${path}/${feed.id}/revocation`)).status).toBe(409);
  });

  test('is made and revoked at its own site only', async () => {
    const { feed } = await make();
    const other = await buildSite(server.deps.database);
    const role = [{ role: 'operations' as const, siteId: other.site.id }];
    const stranger = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    const there = `/api/sites/${other.site.id}/calendar-feeds`;
    expect((await stranger.send('post', `${there}/${feed.id}/revocation`)).status).toBe(404);
    expect(((await stranger.get(there)).body as { feeds: unknown[] }).feeds).toEqual([]);
    const named = await operations.send('post', path, { name: 'Call 020 7946 0958' });
    expect(named.status).toBe(400);
  });

  // Last: it uses the minute's readings up for this test's address.
  test('is read so many times a minute, then refused with what to do', async () => {
    const { address } = await make();
    let last = await read(address);
    for (let i = 0; i < readingsAMinute && last.status === 200; i += 1) last = await read(address);
    expect(last.status).toBe(429);
    expect((JSON.parse(last.text) as Problem).next).toBe('Set the calendar program to read it once an hour.');
  });
});
