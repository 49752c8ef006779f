import { describe, expect, it } from 'vitest';
import { skyTone } from '../../../shared/charts/daylight.ts';
import { bandsOf, needDomain, placeOf } from '../../../shared/charts/need-columns.ts';
import type { NeedColumn } from '../../../shared/charts/need-columns.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

const forecast = (change: Partial<NeedColumn & { kind: 'forecast' }> = {}): NeedColumn & { kind: 'forecast' } => ({
  kind: 'forecast',
  at: 0,
  staffed: 20,
  p5: 12,
  p25: 16,
  p50: 18,
  p75: 21,
  p90: 24,
  p95: 26,
  ...change,
});

describe('bandsOf', () => {
  it('runs from 0 to P95 without a gap, cut in two at the staffed beds', () => {
    const bands = bandsOf(forecast());
    expect(bands).toEqual([
      { from: 0, to: 12, certainty: 1, short: false },
      { from: 12, to: 16, certainty: 2, short: false },
      { from: 16, to: 18, certainty: 3, short: false },
      { from: 18, to: 20, certainty: 4, short: false },
      { from: 20, to: 21, certainty: 4, short: true },
      { from: 21, to: 26, certainty: 5, short: true },
    ]);
  });
  it('shows no ember where P95 stays at the line', () => {
    expect(bandsOf(forecast({ staffed: 26 })).some((band) => band.short)).toBe(false);
  });
  it('is all ember with no staffed beds, and nothing with no need', () => {
    expect(bandsOf(forecast({ staffed: 0 })).every((band) => band.short)).toBe(true);
    expect(bandsOf(forecast({ p5: 0, p25: 0, p50: 0, p75: 0, p90: 0, p95: 0 }))).toEqual([]);
  });
});

describe('placeOf', () => {
  const hours = [0, 3600, 7200].map((at) => ({ at }));
  it('puts an instant within its hour', () => {
    expect(placeOf(hours, 1800)).toBe(0.5);
    expect(placeOf(hours, 7200)).toBe(2);
    expect(placeOf(hours, 9000)).toBe(2.5);
    expect(placeOf(hours, -100)).toBe(0);
    expect(placeOf(hours, 99_999)).toBe(3);
  });
  it('stretches over an hour of other length when the clocks change', () => {
    expect(placeOf([{ at: 0 }, { at: 5400 }], 2700)).toBe(0.5);
  });
});

describe('needDomain', () => {
  it('starts a short strip at 0 and cuts a tall one only where nothing is lost', () => {
    expect(needDomain([forecast()], false)).toEqual({ low: 0, high: 26, cut: false });
    const high = needDomain([forecast({ p5: 44, p25: 46, p50: 48, p75: 51, p90: 54, p95: 56, staffed: 60 })], true);
    expect(high.cut).toBe(true);
    expect(high.low).toBeLessThan(44);
    expect(needDomain([forecast({ p5: 1 })], true).low).toBe(0);
  });
  it('holds with nothing to draw', () => {
    expect(needDomain([], true)).toEqual({ low: 0, high: 1, cut: false });
  });
});

describe('skyTone', () => {
  it('is night at midnight and day at noon, and knows a southern summer', () => {
    const london = makeZone('Europe/London');
    const auckland = makeZone('Pacific/Auckland');
    expect(skyTone(london, Date.UTC(2026, 11, 1, 0) / 1000)).toBe(4);
    expect(skyTone(london, Date.UTC(2026, 11, 1, 12) / 1000)).toBe(1);
    // 06:00 local: dark in a northern December, light in a southern one.
    expect(skyTone(london, Date.UTC(2026, 11, 15, 6) / 1000)).toBe(4);
    expect(skyTone(auckland, Date.UTC(2026, 11, 14, 17) / 1000)).toBeLessThanOrEqual(2);
  });
});
