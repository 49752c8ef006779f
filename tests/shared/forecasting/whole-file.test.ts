import { describe, expect, it } from 'vitest';
import { hourOfWeek, hoursOfWeek } from '../../../shared/domain/hour-of-week.ts';
import { arrivalDiagnostics } from '../../../shared/forecasting/arrival-diagnostics.ts';
import { weeklyRates } from '../../../shared/forecasting/weekly-rates.ts';
import { pooledDispersionTest } from '../../../shared/stochastic/arrival-process-tests.ts';
import { garwoodLimits } from '../../../shared/stochastic/garwood.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { fitReferenceLog } from '../../support/fit-reference-log.ts';
import { readReference } from '../../support/read-reference-log.ts';

// A log of 23 weeks from a stated process, read and fitted by the product's own code from the file on. What the file holds
// was worked out from it apart by make-expected.py (NumPy, SciPy, zoneinfo); what it was drawn from stands in truth.json.

interface Dispersion {
  df: number;
  index: number;
  p: number;
}
interface Expected {
  rows: number;
  visitsByArea: number[];
  recorded: Record<string, number>;
  exposureHours: number[];
  oddHours: { day: number; hour: number; exposureHours: number; arrivals: number }[];
  dayHours: number[];
  counts: number[][];
  dayCounts: number[][];
  ratePerHour: number[][];
  limits: [low: number, high: number][][];
  hourDispersion: Dispersion;
  dayDispersion: Dispersion;
}

const expected = readReference('expected.json') as Expected;
const { truth, outcome, table, counts, arrival } = fitReferenceLog();
const areas = truth.areas.map((_, area) => area);
const exposure = counts.areaExposure?.[0] ?? counts.exposureHours;
const days = exposure.length / 24;

/** Sums of values by hour of the week. */
function byHourOfWeek(values: Float64Array): Float64Array {
  const sums = new Float64Array(hoursOfWeek);
  values.forEach((value, i) => (sums[hourOfWeek(counts.firstLocalHour + i)] += value));
  return sums;
}

const perDay = (values: Float64Array): number[] =>
  Array.from({ length: days }, (_, d) => values.subarray(24 * d, 24 * d + 24).reduce((sum, value) => sum + value, 0));
const site = counts.counts[0].map((value, i) => value + counts.counts[1][i]);

describe('the file as read', () => {
  it('holds every visit, without a problem', () => {
    if (outcome.refused !== null) throw new Error(outcome.refused[0].message);
    const { rows, goodRows, problemRows, recorded } = outcome.report;
    expect([rows, goodRows, problemRows]).toEqual([expected.rows, expected.rows, 0]);
    expect(recorded).toMatchObject(expected.recorded);
    for (const area of areas)
      expect(table.area.reduce((n, value) => n + (value === area ? 1 : 0), 0)).toBe(expected.visitsByArea[area]);
  });
});

describe('arrivals', () => {
  it('exposure equals real hours by label, the outage and both clock changes allowed for', () => {
    byHourOfWeek(exposure).forEach((value, hour) => {
      expectWithin(value, expected.exposureHours[hour], 1e-9, `hour of week ${hour}`);
    });
    perDay(exposure).forEach((value, day) => {
      expectWithin(value, expected.dayHours[day], 1e-9, `day ${day}`);
    });
    const odd = Array.from(exposure.keys()).filter((i) => exposure[i] !== 1);
    expect(
      odd.map((i) => ({ day: Math.floor(i / 24), hour: i % 24, exposureHours: exposure[i], arrivals: site[i] })),
    ).toEqual(expected.oddHours);
  });

  it('counts are equal by hour of the week and by day', () => {
    for (const area of areas) {
      expect(Array.from(byHourOfWeek(counts.counts[area]))).toEqual(expected.counts[area]);
      expect(perDay(counts.counts[area])).toEqual(expected.dayCounts[area]);
    }
  });

  it('raw rates and their Garwood limits equal SciPy’s (chi2.ppf)', () => {
    const hours = byHourOfWeek(exposure);
    for (const area of areas) {
      byHourOfWeek(counts.counts[area]).forEach((count, hour) => {
        const label = `${truth.areas[area]}, hour ${hour}`;
        expectRelative(count / hours[hour], expected.ratePerHour[area][hour], 1e-12, label);
        garwoodLimits(count, hours[hour], 0.95).forEach((limit, k) => {
          expectRelative(limit, expected.limits[area][hour][k], 1e-6, label);
        });
      });
    }
  });

  it('dispersion of hours and days equals SciPy’s, and the fit reports it', () => {
    const hourGroups = Array.from({ length: hoursOfWeek }, (_, hour) =>
      Array.from(site.keys())
        .filter((i) => hourOfWeek(counts.firstLocalHour + i) === hour && exposure[i] === 1)
        .map((i) => site[i]),
    );
    const totals = perDay(site);
    const dayGroups = Array.from({ length: 7 }, (_, weekday) =>
      totals.filter((_, day) => day % 7 === weekday && Math.abs(expected.dayHours[day] - 24) < 1e-9),
    );
    for (const [groups, reference] of [
      [hourGroups, expected.hourDispersion],
      [dayGroups, expected.dayDispersion],
    ] as const) {
      const found = pooledDispersionTest(groups);
      expect(found.df).toBe(reference.df);
      expectRelative(found.index, reference.index, 1e-12, 'index');
      expectRelative(found.p, reference.p, 1e-9, 'p');
    }
    expectWithin(
      arrivalDiagnostics(arrival, counts).hourDispersion,
      expected.hourDispersion.index,
      0.002,
      'as reported',
    );
  });

  it('shrunk rates lie within their own error of the true ones', () => {
    // Measure: standardised errors of the 336 log rates. They share the level's error, so they are not 336 tries.
    const cells = areas.flatMap((area) => {
      const { ratePerHour, low, high } = weeklyRates(arrival, area);
      return ratePerHour.map((rate, hour) => {
        const real = truth.ratePerHour[area][hour];
        const sd = Math.log(high[hour] / low[hour]) / (2 * 1.959964);
        const raw = expected.ratePerHour[area][hour];
        return {
          inside: real >= low[hour] && real <= high[hour],
          z: Math.log(rate / real) / sd,
          shrunk: (rate - real) ** 2,
          raw: (raw - real) ** 2,
        };
      });
    });
    const mean = (of: (cell: (typeof cells)[number]) => number): number =>
      cells.reduce((sum, cell) => sum + of(cell), 0) / cells.length;
    const coverage = mean(({ inside }) => Number(inside));
    expect(coverage).toBeGreaterThanOrEqual(0.9);
    expect(coverage).toBeLessThanOrEqual(0.99);
    const square = mean(({ z }) => z * z);
    expect(square).toBeGreaterThan(0.4);
    expect(square).toBeLessThan(1.5);
    // Shrinking pays: less than a third of the raw rates' mean square error.
    expect(mean(({ shrunk }) => shrunk)).toBeLessThan(mean(({ raw }) => raw) / 3);
  });
});
