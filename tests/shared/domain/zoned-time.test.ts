import { describe, expect, it } from 'vitest';
import { isoWeekday, localDate, localParts, localSecondsOf, makeZone } from '../../../shared/domain/zoned-time.ts';
import reference from '../../reference/zones.json' with { type: 'json' };

// Source of all values: Python's zoneinfo (tests/reference/make-zones.py).
describe.each(reference.zones)('$name', (expected) => {
  it('changes its clock when zoneinfo says', () => {
    const zone = makeZone(expected.name);
    expect(zone.name).toBe(expected.name);
    expect(zone.changesBetween(expected.from, expected.to)).toEqual(expected.changes);
  });

  it('bounds are open at the start and closed at the end', () => {
    const zone = makeZone(expected.name);
    for (const change of expected.changes) {
      expect(zone.changesBetween(change.at - 1, change.at)).toEqual([change]);
      expect(zone.changesBetween(change.at, change.at + 1)).toEqual([]);
      expect(zone.changesBetween(change.at - 86_400, change.at - 1)).toEqual([]);
    }
  });

  it('shows the same offset, date and time, whatever is asked first', () => {
    for (const samples of [expected.samples, expected.samples.toReversed()]) {
      const zone = makeZone(expected.name);
      for (const sample of samples) {
        expect(zone.offsetAt(sample.at), `offset at ${sample.at}`).toBe(sample.offset);
        const local = zone.toLocal(sample.at);
        expect(local).toBe(sample.at + sample.offset);
        const { year, month, day, hour, minute, weekday } = sample;
        expect(localParts(local)).toEqual({ year, month, day, hour, minute, weekday });
        expect(localDate(local)).toBe(sample.date);
        expect(isoWeekday(local)).toBe(weekday);
        expect(localSecondsOf(sample.date, hour * 60 + minute)).toBe(local - (((local % 60) + 60) % 60));
      }
    }
  });

  it('finds every instant that shows a local time: none, one or two', () => {
    const zone = makeZone(expected.name);
    for (const { local, instants } of expected.localTimes) {
      expect(zone.fromLocal(local), `local ${local}`).toEqual(instants);
    }
  });
});

describe('the reference itself', () => {
  it('holds skipped, repeated, half-hour and Ramadan changes', () => {
    const counts = new Set(reference.zones.flatMap((zone) => zone.localTimes.map((row) => row.instants.length)));
    expect([...counts].sort()).toEqual([0, 1, 2]);
    const steps = (name: string) => {
      const zone = reference.zones.find((each) => each.name === name);
      return new Set(zone?.changes.slice(1).map((change, i) => Math.abs(change.offset - zone.changes[i].offset)));
    };
    expect(steps('Australia/Lord_Howe')).toEqual(new Set([1800]));
    expect(steps('Africa/Casablanca')).toEqual(new Set([3600]));
    expect(steps('Asia/Kathmandu')).toEqual(new Set());
  });
});

describe('dates', () => {
  it('localSecondsOf knows the calendar', () => {
    expect(localSecondsOf('1970-01-01')).toBe(0);
    expect(localSecondsOf('2024-02-29', 90)).toBe(Date.UTC(2024, 1, 29, 1, 30) / 1000);
    for (const bad of ['2023-02-29', '2024-13-01', '2024-1-1', '', '2024-02-30', 'today', '2024-02-01T00:00']) {
      expect(() => localSecondsOf(bad), bad).toThrow(RangeError);
    }
  });

  it('names an unknown zone', () => {
    expect(() => makeZone('Mars/Olympus')).toThrow(/"Mars\/Olympus"/);
    expect(() => makeZone('')).toThrow(RangeError);
  });

  it('weekdays before 1970 (1969-12-31 was a Wednesday)', () => {
    expect(isoWeekday(-1)).toBe(3);
    expect(isoWeekday(0)).toBe(4);
  });
});
