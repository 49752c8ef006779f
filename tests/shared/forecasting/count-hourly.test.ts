import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { countHourly } from '../../../shared/forecasting/count-hourly.ts';
import { makeRateGrid } from '../../../shared/forecasting/rate-grid.ts';
import type { VisitTable } from '../../../shared/forecasting/visit-table.ts';

function visitsAt(times: number[], areas: number[] = times.map(() => 0)): VisitTable {
  const none = new Float64Array(times.length).fill(NaN);
  return {
    length: times.length,
    area: Uint8Array.from(areas),
    arrivalAt: Float64Array.from(times),
    bedSpaceAt: none,
    admissionDecisionAt: none,
    departureAt: none,
    disposition: new Uint8Array(times.length).fill(255),
    byAmbulance: new Uint8Array(times.length).fill(255),
  };
}

const at = (text: string): number => Date.parse(text) / 1000;

// Clock changes from the IANA time zone database: London 2024-03-31 01:00 and 2024-10-27 02:00 local, Lord Howe half an
// hour on 2024-04-07 02:00 local (back) and 2024-10-06 02:00 (forward), Kolkata none and at +05:30.
describe('arrivals by local hour', () => {
  it('London: the skipped hour has no exposure, the repeated one two hours and both their arrivals', () => {
    const zone = makeZone('Europe/London');
    const spring = countHourly(visitsAt([]), 1, zone, at('2024-03-31T00:00Z'), at('2024-03-31T23:00Z'));
    expect([...spring.exposureHours]).toEqual([1, 0, ...new Array<number>(22).fill(1)]);
    const autumn = countHourly(
      visitsAt([at('2024-10-27T00:10Z'), at('2024-10-27T01:10Z'), at('2024-10-27T02:10Z')]),
      1,
      zone,
      at('2024-10-26T23:00Z'),
      at('2024-10-28T00:00Z'),
    );
    expect([...autumn.exposureHours]).toEqual([1, 2, ...new Array<number>(22).fill(1)]);
    expect(autumn.counts[0][1]).toBe(2);
    expect(autumn.counts[0][2]).toBe(1);
    expect(makeRateGrid(zone, at('2024-10-26T23:00Z'), at('2024-10-28T00:00Z')).hours).toHaveLength(25);
  });

  it('Lord Howe: hours of one and a half and of half an hour', () => {
    const zone = makeZone('Australia/Lord_Howe');
    const back = countHourly(visitsAt([]), 1, zone, at('2024-04-06T13:00Z'), at('2024-04-07T13:30Z'));
    expect([...back.exposureHours].slice(0, 4)).toEqual([1, 1.5, 1, 1]);
    const forward = countHourly(visitsAt([]), 1, zone, at('2024-10-05T13:30Z'), at('2024-10-06T13:00Z'));
    expect([...forward.exposureHours].slice(0, 4)).toEqual([1, 1, 0.5, 1]);
    expect(back.exposureHours.reduce((sum, hours) => sum + hours, 0)).toBe(24.5);
  });

  it('Kolkata: local hours begin at half past in UTC', () => {
    const zone = makeZone('Asia/Kolkata');
    const counts = countHourly(
      visitsAt([at('2024-05-01T18:29Z'), at('2024-05-01T18:30Z')]),
      1,
      zone,
      at('2024-04-30T18:30Z'),
      at('2024-05-02T18:30Z'),
    );
    expect(counts.counts[0][23]).toBe(1);
    expect(counts.counts[0][24]).toBe(1);
    expect(counts.exposureHours.every((hours) => hours === 1)).toBe(true);
  });

  it('takes gaps out of exposure and of the counts, once where they overlap, for their own area only', () => {
    const zone = makeZone('Asia/Kolkata');
    const from = at('2024-04-30T18:30Z');
    const counts = countHourly(
      visitsAt([from + 1800, from + 3700, from + 1800], [0, 0, 1]),
      2,
      zone,
      from,
      from + 86_400,
      [
        { area: 0, from, to: from + 2700 },
        { area: null, from: from + 2400, to: from + 3000 },
      ],
    );
    expect(counts.areaExposure?.[0][0]).toBeCloseTo(1 - 3000 / 3600, 9);
    expect(counts.areaExposure?.[1][0]).toBeCloseTo(1 - 600 / 3600, 9);
    expect([...counts.counts[0].slice(0, 2)]).toEqual([0, 1]);
    expect(counts.counts[1][0]).toBe(1);
  });

  it('pads to whole local days without exposure', () => {
    const zone = makeZone('Europe/London');
    const counts = countHourly(visitsAt([]), 1, zone, at('2024-01-10T05:30Z'), at('2024-01-11T07:00Z'));
    expect(counts.firstLocalHour % 24).toBe(0);
    expect(counts.exposureHours).toHaveLength(48);
    expect(counts.exposureHours[5]).toBe(0.5);
    expect(counts.exposureHours[31]).toBe(0);
  });

  it('refuses by name: an unknown area, a time that is none, a window that is empty', () => {
    const zone = makeZone('UTC');
    expect(() => countHourly(visitsAt([10], [3]), 2, zone, 0, 86_400)).toThrow(/visit 0 names area 3/);
    expect(() => countHourly(visitsAt([NaN]), 1, zone, 0, 86_400)).toThrow(/visit 0/);
    expect(() => countHourly(visitsAt([]), 1, zone, 10, 10)).toThrow(RangeError);
    expect(() => countHourly(visitsAt([]), 1, zone, 0, 86_400, [{ area: 4, from: 0, to: 10 }])).toThrow(/area 4/);
  });
});
