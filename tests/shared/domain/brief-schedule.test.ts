import fc from 'fast-check';
import { expect, test } from 'vitest';
import { lastDue, nextDue } from '../../../shared/domain/brief-schedule.ts';
import { localParts, makeZone } from '../../../shared/domain/zoned-time.ts';

const utc = (text: string) => Date.parse(text) / 1000;

/* Clock changes: IANA time zone database. Europe/London left summer time on 2026-10-25 and enters it on 2027-03-28 at 01:00 UTC. */
test.each([
  ['the day itself, before the hour', '2026-12-07T06:59:59Z', '2026-11-30T07:00:00Z', '2026-12-07T07:00:00Z'],
  ['the very second', '2026-12-07T07:00:00Z', '2026-12-07T07:00:00Z', '2026-12-14T07:00:00Z'],
  ['the end of a week', '2026-12-06T23:59:00Z', '2026-11-30T07:00:00Z', '2026-12-07T07:00:00Z'],
  ['across the end of summer time', '2026-10-26T08:00:00Z', '2026-10-26T07:00:00Z', '2026-11-02T07:00:00Z'],
  ['in summer time', '2026-07-07T12:00:00Z', '2026-07-06T06:00:00Z', '2026-07-13T06:00:00Z'],
])('Monday 07:00 in London: %s', (_, at, last, next) => {
  const zone = makeZone('Europe/London');
  const schedule = { weekday: 1, minuteOfDay: 420 };
  expect(lastDue(zone, schedule, utc(at))).toBe(utc(last));
  expect(nextDue(zone, schedule, utc(at))).toBe(utc(next));
});

test('a time that the clock skips is moved on by the gap; one that it repeats is the first', () => {
  const zone = makeZone('Europe/London');
  expect(nextDue(zone, { weekday: 7, minuteOfDay: 90 }, utc('2027-03-27T12:00:00Z'))).toBe(utc('2027-03-28T01:30:00Z'));
  expect(nextDue(zone, { weekday: 7, minuteOfDay: 90 }, utc('2026-10-24T12:00:00Z'))).toBe(utc('2026-10-25T00:30:00Z'));
});

test.each(['Australia/Lord_Howe', 'Asia/Kolkata', 'Pacific/Auckland', 'America/Toronto'])(
  'in %s: one a week, the last at or before, the next after, at its weekday and hour',
  (name) => {
    const zone = makeZone(name);
    fc.assert(
      fc.property(
        fc.integer({ min: utc('2026-01-01T00:00:00Z'), max: utc('2028-01-01T00:00:00Z') }),
        fc.integer({ min: 1, max: 7 }),
        fc.integer({ min: 4 * 60, max: 23 * 60 }),
        (at, weekday, minuteOfDay) => {
          const schedule = { weekday, minuteOfDay };
          const last = lastDue(zone, schedule, at);
          const next = nextDue(zone, schedule, at);
          expect(last).toBeLessThanOrEqual(at);
          expect(next).toBeGreaterThan(at);
          expect(Math.abs(next - last - 7 * 86_400)).toBeLessThanOrEqual(3600);
          const parts = localParts(zone.toLocal(last));
          expect([parts.weekday, parts.hour * 60 + parts.minute]).toEqual([weekday, minuteOfDay]);
          expect(lastDue(zone, schedule, next - 1)).toBe(last);
          expect(nextDue(zone, schedule, last)).toBe(next);
        },
      ),
      { numRuns: 60 },
    );
  },
);
