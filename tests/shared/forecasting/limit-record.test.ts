import { describe, expect, test } from 'vitest';
import {
  nightChance,
  ranShortInNight,
  recordOfLimit,
  type LimitNight,
} from '../../../shared/forecasting/limit-record.ts';

const night = (chance: number | null, ranShort: boolean | null): LimitNight => ({
  date: '2026-11-30',
  chance,
  ranShort,
});
const times = (count: number, one: LimitNight) => new Array<LimitNight>(count).fill(one);

describe('how often a limit would have warned', () => {
  // J. P. Finley's tornado forecasts of 1884, the textbook two-by-two table (Wilks, Statistical Methods in the Atmospheric
  // Sciences, chapter on forecast verification): 28 hits, 72 false alarms, 23 misses, 2,680 correct negatives. Values from memory.
  test('counts as the textbook table does', () => {
    const nights = [
      ...times(28, night(0.6, true)),
      ...times(72, night(0.6, false)),
      ...times(23, night(0.1, true)),
      ...times(2680, night(0.1, false)),
    ];
    expect(recordOfLimit(nights, 0.25)).toEqual({
      nights: 2803,
      judged: 2803,
      warned: 100,
      ranShort: 51,
      missed: 23,
      unneeded: 72,
    });
  });

  test('warns past the limit only, never at it; a lower limit never warns less and never misses more', () => {
    const nights = Array.from({ length: 101 }, (_, index) => night(index / 100, index % 7 === 3));
    expect(recordOfLimit(nights, 0.25).warned).toBe(75);
    let before = recordOfLimit(nights, 0);
    for (let limit = 1; limit <= 100; limit += 1) {
      const next = recordOfLimit(nights, limit / 100);
      expect(next.warned).toBeLessThanOrEqual(before.warned);
      expect(next.missed).toBeGreaterThanOrEqual(before.missed);
      expect(next.warned - next.unneeded + next.missed).toBe(next.ranShort);
      before = next;
    }
  });

  test('what is not known is counted apart, never taken for calm', () => {
    const nights = [night(null, true), night(0.9, null), night(null, null), night(0.9, true)];
    expect(recordOfLimit(nights, 0.25)).toEqual({
      nights: 4,
      judged: 1,
      warned: 1,
      ranShort: 1,
      missed: 0,
      unneeded: 0,
    });
    expect(recordOfLimit([], 0.25)).toMatchObject({ nights: 0, judged: 0 });
    expect(() => recordOfLimit([], 1.2)).toThrow(RangeError);
  });
});

describe('a night', () => {
  const chances = (values: number[]) => values.map((chance) => ({ chance, se: 0 }));
  const area = {
    counted: true,
    shortfall: chances([0.1, 0.2, 0.5, 0.3]),
    shortfallWithin: chances([0.2, 0.3, 0.6, 0.9]),
  };
  const hours = [100, 200, 300, 400];

  test('has the highest printed chance of its hours: within the hour in a small area', () => {
    expect(nightChance(hours, area, 20, 200, 400)).toBe(0.5);
    expect(nightChance(hours, area, 8, 200, 400)).toBe(0.6);
    expect(nightChance(hours, area, 8, 200, 401)).toBe(0.9);
    expect(nightChance(hours, area, 20, 500, 600)).toBeNull();
    expect(nightChance(hours, { ...area, counted: false }, 20, 200, 400)).toBeNull();
  });

  test('ran short if any known hour did; did not only if every hour is known', () => {
    expect(ranShortInNight([20, 21, null], [20, 20, 20])).toBe(true);
    expect(ranShortInNight([20, 19, null], [20, 20, 20])).toBeNull();
    expect(ranShortInNight([20, 19, 20], [20, 20, 20])).toBe(false);
    expect(ranShortInNight([], [])).toBeNull();
    expect(() => ranShortInNight([1], [])).toThrow(RangeError);
  });
});
