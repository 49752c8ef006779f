import { describe, expect, it } from 'vitest';
import { exposureByLocalHour, hourOfWeek, hoursOfWeek, localHourAt } from '../../../shared/domain/hour-of-week.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import reference from '../../reference/zones.json' with { type: 'json' };

// Source of all values: Python's zoneinfo (tests/reference/make-zones.py).
describe.each(reference.zones)('$name', (expected) => {
  const zone = makeZone(expected.name);

  it('hour of week is 24 (ISO weekday − 1) + local hour', () => {
    for (const sample of expected.samples) {
      expect(hourOfWeek(localHourAt(zone, sample.at)), `at ${sample.at}`).toBe(sample.hourOfWeek);
    }
  });

  it('exposure by label agrees with counting minutes', () => {
    for (const window of expected.exposure) {
      const own = exposureByLocalHour(zone, window.from, window.to);
      expect(own.firstLocalHour).toBe(window.firstLocalHour);
      expect(own.hours.length).toBe(window.hours.length);
      window.hours.forEach((hours, i) => expect(own.hours[i], `${window.from} hour ${i}`).toBeCloseTo(hours, 10));
    }
  });

  it('exposure over years adds up to the time elapsed, and a full year holds each hour of the week about 52 times', () => {
    const { firstLocalHour, hours } = exposureByLocalHour(zone, expected.from, expected.to);
    expect(hours.reduce((sum, h) => sum + h, 0)).toBeCloseTo((expected.to - expected.from) / 3600, 6);
    const byHourOfWeek = new Float64Array(hoursOfWeek);
    hours.forEach((h, i) => (byHourOfWeek[hourOfWeek(firstLocalHour + i)] += h));
    const weeks = (expected.to - expected.from) / (7 * 86_400);
    for (const h of byHourOfWeek) expect(Math.abs(h - weeks)).toBeLessThan(0.03 * weeks);
  });
});

describe('kinds of change', () => {
  const hoursSeen = (name: string) =>
    new Set(reference.zones.find((zone) => zone.name === name)?.exposure.flatMap((window) => window.hours));

  it('the repeated hour holds 2, the skipped hour 0, a half-hour change 1.5 or 0.5', () => {
    expect(hoursSeen('Europe/London')).toContain(2);
    expect(hoursSeen('Europe/London')).toContain(0);
    expect(hoursSeen('Australia/Lord_Howe')).toContain(1.5);
    expect(hoursSeen('Australia/Lord_Howe')).toContain(0.5);
  });

  it('refuses a window that ends before it starts', () => {
    const zone = makeZone('UTC');
    expect(() => exposureByLocalHour(zone, 10, 10)).toThrow(RangeError);
    expect(() => exposureByLocalHour(zone, 10, NaN)).toThrow(RangeError);
  });

  it('hour of week before 1970 is still 0 .. 167', () => {
    expect(hourOfWeek(-1)).toBe(71);
    expect(hourOfWeek(-72)).toBe(0);
    expect(hourOfWeek(-73)).toBe(167);
  });
});
