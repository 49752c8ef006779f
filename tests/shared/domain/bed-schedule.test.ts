import { describe, expect, it } from 'vitest';
import { bedsAt, halfHourOfWeek, staffedBedSteps } from '../../../shared/domain/bed-schedule.ts';
import { localSecondsOf, makeZone } from '../../../shared/domain/zoned-time.ts';

const london = makeZone('Europe/London');
const lordHowe = makeZone('Australia/Lord_Howe');
const utc = (text: string) => Date.parse(text) / 1000;
const flat = (beds: number) => new Array<number>(336).fill(beds);
/** Each half hour's own number, so that a step tells which half hour of the week it came from. */
const numbered = Array.from({ length: 336 }, (_, index) => index);
const written = (steps: { at: number; beds: number }[]) =>
  steps.map(({ at, beds }) => `${new Date(at * 1000).toISOString().slice(0, 16)} ${beds}`);

describe('halfHourOfWeek', () => {
  it.each([
    ['2026-01-12', 0, 0],
    ['2026-01-12', 29, 0],
    ['2026-01-12', 30, 1],
    ['2026-01-14', 20 * 60 + 30, 2 * 48 + 41],
    ['2026-01-18', 1439, 335],
    // 1969-12-29 was a Monday, before the first instant.
    ['1969-12-29', 0, 0],
    ['1969-12-31', 1439, 2 * 48 + 47],
  ])('%s minute %i is half hour %i (2026-01-12 is a Monday)', (date, minute, expected) => {
    expect(halfHourOfWeek(localSecondsOf(date, minute))).toBe(expected);
  });
});

describe('staffedBedSteps', () => {
  it('begins at the window’s start and steps only where the plan changes', () => {
    const plan = flat(10);
    for (let half = 2 * 48 + 42; half < 3 * 48; half += 1) plan[half] = 14;
    const steps = staffedBedSteps(london, plan, [], utc('2026-01-14T20:10Z'), utc('2026-01-15T08:00Z'));
    expect(written(steps)).toEqual(['2026-01-14T20:10 10', '2026-01-14T21:00 14', '2026-01-15T00:00 10']);
  });

  it('gives the whole week’s half hours in their order, and starts again on Monday', () => {
    const from = utc('2026-01-12T00:00Z');
    const steps = staffedBedSteps(london, numbered, [], from, from + 8 * 86_400);
    expect(steps.map(({ beds }) => beds)).toEqual([...numbered, ...numbered.slice(0, 48)]);
    expect(steps.every(({ at }, index) => at === from + index * 1800)).toBe(true);
  });

  // The clock changes are those named in shift-times.test.ts.
  it('repeats the half hours of a repeated hour and leaves out those of a skipped one', () => {
    const sunday = 6 * 48;
    const autumn = staffedBedSteps(london, numbered, [], utc('2026-10-25T00:00Z'), utc('2026-10-25T02:30Z'));
    expect(autumn.map(({ beds }) => beds - sunday)).toEqual([2, 3, 2, 3, 4]);
    const spring = staffedBedSteps(london, numbered, [], utc('2027-03-28T00:00Z'), utc('2027-03-28T02:00Z'));
    expect(spring.map(({ beds }) => beds - sunday)).toEqual([0, 1, 4, 5]);
  });

  it('repeats and leaves out single half hours at Lord Howe', () => {
    const sunday = 6 * 48;
    // 02:00 of +11:00 (15:00 UTC) becomes 01:30 of +10:30.
    const autumn = staffedBedSteps(lordHowe, numbered, [], utc('2026-04-04T14:00Z'), utc('2026-04-04T16:30Z'));
    expect(written(autumn).map((line) => line.slice(11))).toEqual([
      `14:00 ${sunday + 2}`,
      `14:30 ${sunday + 3}`,
      // The half hour from 01:30 comes twice in a row: one step.
      `15:30 ${sunday + 4}`,
      `16:00 ${sunday + 5}`,
    ]);
    // 02:00 of +10:30 (15:30 UTC) becomes 02:30 of +11:00.
    const spring = staffedBedSteps(lordHowe, numbered, [], utc('2026-10-03T14:30Z'), utc('2026-10-03T16:30Z'));
    expect(spring.map(({ beds }) => beds - sunday)).toEqual([2, 3, 5, 6]);
  });

  it('lays overrides over the plan from their start until their end, to the second', () => {
    const from = utc('2026-01-14T20:00Z');
    const overrides = [{ fromAt: from + 601, untilAt: from + 7199, beds: 7 }];
    const steps = staffedBedSteps(london, flat(10), overrides, from, from + 86_400);
    expect(steps).toEqual([
      { at: from, beds: 10 },
      { at: from + 601, beds: 7 },
      { at: from + 7199, beds: 10 },
    ]);
  });

  it('of overrides that overlap the later in the list holds, and the earlier again after it', () => {
    const overrides = [
      { fromAt: 0, untilAt: 6000, beds: 7 },
      { fromAt: 1000, untilAt: 2000, beds: 9 },
    ];
    expect(staffedBedSteps(london, flat(10), overrides, 0, 9000).map(({ at, beds }) => [at, beds])).toEqual([
      [0, 7],
      [1000, 9],
      [2000, 7],
      [6000, 10],
    ]);
    const beds = (list: typeof overrides) => bedsAt(staffedBedSteps(london, flat(10), list, 0, 9000), 1500);
    expect(beds(overrides)).toBe(9);
    expect(beds(overrides.toReversed())).toBe(7);
  });

  it('takes overrides that reach beyond the window, and none outside it', () => {
    const from = utc('2026-01-14T20:00Z');
    const to = from + 3600;
    const around = { fromAt: from - 1, untilAt: to + 1, beds: 3 };
    expect(staffedBedSteps(london, flat(10), [around], from, to)).toEqual([{ at: from, beds: 3 }]);
    const outside = [
      { fromAt: from - 60, untilAt: from, beds: 3 },
      { fromAt: to, untilAt: to + 60, beds: 4 },
    ];
    expect(staffedBedSteps(london, flat(10), outside, from, to)).toEqual([{ at: from, beds: 10 }]);
  });

  it('names a plan of another length and a window without time', () => {
    expect(() => staffedBedSteps(london, [1, 2], [], 0, 10)).toThrow(/336/);
    expect(() => staffedBedSteps(london, flat(1), [], 10, 10)).toThrow(RangeError);
    expect(() => staffedBedSteps(london, flat(1), [], 10, NaN)).toThrow(RangeError);
  });
});

describe('bedsAt', () => {
  it('is the last step’s at or before, the first’s before it', () => {
    const steps = [
      { at: 10, beds: 1 },
      { at: 20, beds: 2 },
      { at: 30, beds: 3 },
    ];
    expect([9, 10, 19, 20, 29, 30, 1000].map((at) => bedsAt(steps, at))).toEqual([1, 1, 1, 2, 2, 3, 3]);
  });
});
