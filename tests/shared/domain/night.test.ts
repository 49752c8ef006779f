import { describe, expect, it } from 'vitest';
import { nightOf } from '../../../shared/domain/night.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

/*
 * A night carries the date on which it starts: the product's own rule, no source outside it. Instants and offsets
 * are written out by hand from the zones' published rules (IANA tz database).
 */
const london = makeZone('Europe/London');
const utc = (text: string) => Date.parse(text) / 1000;
const shifts = [
  { startMinute: 420, endMinute: 870 },
  { startMinute: 840, endMinute: 1290 },
  { startMinute: 1260, endMinute: 450 },
];

describe('the night of an instant', () => {
  it.each([
    // 2026-12-01 is a Tuesday; London is at UTC in December.
    ['Wednesday 02:00 is Tuesday night', '2026-12-02T02:00Z', '2026-12-01'],
    ['the night’s first second', '2026-12-01T21:00Z', '2026-12-01'],
    ['its last', '2026-12-02T07:29:59Z', '2026-12-01'],
    ['its end belongs to the next day, and so to the coming night', '2026-12-02T07:30Z', '2026-12-02'],
    ['by day it is the coming night', '2026-12-01T10:00Z', '2026-12-01'],
  ])('%s', (_, at, date) => {
    const night = nightOf(london, shifts, utc(at));
    expect(night.date).toBe(date);
    expect(night.from).toBe(utc(`${date}T21:00Z`));
    expect(night.to).toBe(utc(`${date}T07:30Z`) + 86_400);
    expect(night.since).toBe(utc(`${date}T07:30Z`));
  });

  it('lasts an hour longer where the clock goes back, an hour less where it goes forward', () => {
    // 25 October 2026 01:00 UTC and 28 March 2027 01:00 UTC in London.
    const back = nightOf(london, shifts, utc('2026-10-25T03:00Z'));
    expect(back).toEqual({
      date: '2026-10-24',
      from: utc('2026-10-24T20:00Z'),
      to: utc('2026-10-25T07:30Z'),
      since: utc('2026-10-24T06:30Z'),
    });
    const forward = nightOf(london, shifts, utc('2027-03-28T03:00Z'));
    expect(forward.to - forward.from).toBe(9.5 * 3600);
  });

  it('takes of two shifts across midnight the one that ends last, and needs none', () => {
    const evening = { startMinute: 900, endMinute: 30 };
    const at = utc('2026-12-01T23:00Z');
    expect(nightOf(london, [evening, ...shifts], at).from).toBe(utc('2026-12-01T21:00Z'));
    // A shift that ends at midnight does not cross it.
    const untilMidnight = { startMinute: 900, endMinute: 0 };
    expect(nightOf(london, [untilMidnight], at)).toEqual({
      date: '2026-12-01',
      from: utc('2026-12-01T20:00Z'),
      to: utc('2026-12-02T08:00Z'),
      since: utc('2026-12-01T08:00Z'),
    });
  });

  it('nights follow each other without a hole, in zones of every kind', () => {
    for (const name of ['Europe/London', 'Australia/Lord_Howe', 'Asia/Kolkata', 'Pacific/Auckland']) {
      const zone = makeZone(name);
      let night = nightOf(zone, shifts, utc('2026-09-20T00:00Z'));
      for (let step = 0; step < 220; step += 1) {
        const next = nightOf(zone, shifts, night.to);
        expect(next.since).toBe(night.to);
        expect(next.date > night.date).toBe(true);
        expect(nightOf(zone, shifts, night.to - 1)).toEqual(night);
        night = next;
      }
    }
  });
});
