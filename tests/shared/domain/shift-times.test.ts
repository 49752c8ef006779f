import { describe, expect, it } from 'vitest';
import { instantOfLocal, shiftInCharge, shiftsBetween, type ShiftPattern } from '../../../shared/domain/shift-times.ts';
import { localSecondsOf, makeZone } from '../../../shared/domain/zoned-time.ts';

/*
 * Clock changes used here. Europe/London: last Sunday of March and October at 01:00 UTC (Summer Time Order 2002).
 * Australia/Lord_Howe: half an hour, first Sunday of April (02:00 of +11:00 becomes 01:30 of +10:30) and of October
 * (02:00 of +10:30 becomes 02:30) (IANA time zone database, file australasia).
 */
const london = makeZone('Europe/London');
const lordHowe = makeZone('Australia/Lord_Howe');
const utc = (text: string) => Date.parse(text) / 1000;
const text = (at: number) => new Date(at * 1000).toISOString().slice(0, 16);
const written = (shifts: { name: string; from: number; to: number }[]) =>
  shifts.map(({ name, from, to }) => `${name} ${text(from)} ${text(to)}`);

const early = { name: 'Early', startMinute: 420, endMinute: 870 };
const late = { name: 'Late', startMinute: 840, endMinute: 1290 };
const night = { name: 'Night', startMinute: 1260, endMinute: 450 };
const three: ShiftPattern[] = [early, late, night];

describe('shiftsBetween', () => {
  it('gives every shift that overlaps the window, by start, with the overlap at handover in both', () => {
    expect(written(shiftsBetween(london, three, utc('2026-01-14T12:00Z'), utc('2026-01-15T08:00Z')))).toEqual([
      'Early 2026-01-14T07:00 2026-01-14T14:30',
      'Late 2026-01-14T14:00 2026-01-14T21:30',
      'Night 2026-01-14T21:00 2026-01-15T07:30',
      'Early 2026-01-15T07:00 2026-01-15T14:30',
    ]);
  });

  it('leaves out what ends as the window begins, or begins as it ends', () => {
    const names = (from: string, to: string) =>
      shiftsBetween(london, three, utc(from), utc(to)).map(({ name }) => name);
    expect(names('2026-01-14T14:30Z', '2026-01-14T21:00Z')).toEqual(['Late']);
    expect(names('2026-01-14T14:29Z', '2026-01-14T21:01Z')).toEqual(['Early', 'Late', 'Night']);
  });

  it('finds the night that began the day before', () => {
    expect(written(shiftsBetween(london, [night], utc('2026-01-15T03:00Z'), utc('2026-01-15T04:00Z')))).toEqual([
      'Night 2026-01-14T21:00 2026-01-15T07:30',
    ]);
  });

  it('a shift that ends at its start lasts a day', () => {
    const day = { name: 'Day', startMinute: 480, endMinute: 480 };
    expect(written(shiftsBetween(london, [day], utc('2026-01-14T10:00Z'), utc('2026-01-14T11:00Z')))).toEqual([
      'Day 2026-01-14T08:00 2026-01-15T08:00',
    ]);
  });

  it('keeps local times through the night with a repeated hour and the night without one', () => {
    const autumn = shiftsBetween(london, [night], utc('2026-10-24T23:00Z'), utc('2026-10-25T00:00Z'));
    expect(written(autumn)).toEqual(['Night 2026-10-24T20:00 2026-10-25T07:30']);
    expect((autumn[0].to - autumn[0].from) / 3600).toBe(11.5);
    const spring = shiftsBetween(london, [night], utc('2027-03-27T23:00Z'), utc('2027-03-28T00:00Z'));
    expect(written(spring)).toEqual(['Night 2027-03-27T21:00 2027-03-28T06:30']);
    expect((spring[0].to - spring[0].from) / 3600).toBe(9.5);
  });

  it('does so where clocks change by half an hour', () => {
    const hours = (from: string, to: string) => {
      const [shift] = shiftsBetween(lordHowe, [night], utc(from), utc(to));
      return [text(shift.from), text(shift.to), (shift.to - shift.from) / 3600];
    };
    // 2026-04-05: back to +10:30. 2026-10-04: on to +11:00.
    expect(hours('2026-04-04T12:00Z', '2026-04-04T13:00Z')).toEqual(['2026-04-04T10:00', '2026-04-04T21:00', 11]);
    expect(hours('2026-10-03T12:00Z', '2026-10-03T13:00Z')).toEqual(['2026-10-03T10:30', '2026-10-03T20:30', 10]);
  });

  it('a shift that begins in the skipped half hour begins as long after its start as the gap is', () => {
    const shift = { name: 'Odd', startMinute: 135, endMinute: 600 };
    expect(written(shiftsBetween(lordHowe, [shift], utc('2026-10-03T16:00Z'), utc('2026-10-03T17:00Z')))).toEqual([
      // 02:15 does not exist; 02:45 of +11:00 is 15:45 UTC.
      'Odd 2026-10-03T15:45 2026-10-03T23:00',
    ]);
  });

  it('without patterns there is none', () => {
    expect(shiftsBetween(london, [], 0, 86_400)).toEqual([]);
  });
});

describe('instantOfLocal', () => {
  it('is the first of two instants, and moves a skipped time on', () => {
    expect(text(instantOfLocal(london, localSecondsOf('2026-10-25', 90)))).toBe('2026-10-25T00:30');
    expect(text(instantOfLocal(london, localSecondsOf('2027-03-28', 90)))).toBe('2027-03-28T01:30');
    expect(text(instantOfLocal(london, localSecondsOf('2026-07-01', 90)))).toBe('2026-07-01T00:30');
  });
});

describe('shiftInCharge', () => {
  const shifts = shiftsBetween(london, three, utc('2026-01-14T00:00Z'), utc('2026-01-16T00:00Z'));
  it.each([
    ['2026-01-14T13:59:59Z', 'Early'],
    ['2026-01-14T14:00:00Z', 'Late'],
    ['2026-01-14T14:29:59Z', 'Late'],
    ['2026-01-14T20:59:59Z', 'Late'],
    ['2026-01-14T21:00:00Z', 'Night'],
    ['2026-01-15T06:59:59Z', 'Night'],
    ['2026-01-15T07:00:00Z', 'Early'],
  ])('at %s it is %s: the overlap belongs to the incoming shift', (at, expected) => {
    expect(shiftInCharge(shifts, utc(at))?.name).toBe(expected);
  });

  it('is null in a hole between shifts', () => {
    const holed = shiftsBetween(london, [early], utc('2026-01-14T00:00Z'), utc('2026-01-15T00:00Z'));
    expect(shiftInCharge(holed, utc('2026-01-14T14:29:59Z'))?.name).toBe('Early');
    expect(shiftInCharge(holed, utc('2026-01-14T14:30:00Z'))).toBeNull();
    expect(shiftInCharge([], 0)).toBeNull();
  });
});
