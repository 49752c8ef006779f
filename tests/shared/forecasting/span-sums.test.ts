import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { ambulanceBlocks } from '../../../shared/forecasting/ambulance-share.ts';
import type { ArrivalPercentiles } from '../../../shared/forecasting/forecast-arrivals.ts';
import { forecastArrivals } from '../../../shared/forecasting/forecast-arrivals.ts';
import reference from '../../reference/span-sums.json' with { type: 'json' };
import { buildExactArrivals, nextMonday } from '../../support/build-exact-arrivals.ts';
import { expectWithin } from '../../support/closeness.ts';

/**
 * Percentiles of arrivals by hour, shift, day and week against an independent computation: exact convolution of negative
 * binomial laws with SciPy, and a simulation with NumPy where no closed form exists (tests/reference/make-span-sums.py).
 */
const zone = makeZone('UTC');
const hour = 3600;
const monday = nextMonday(480_000);
const from = monday * hour;
/** Enough known arrivals that the share by ambulance is as good as exact. */
const known = 1_000_000;
const ambulance = {
  known: [0, 1].map(() => new Array<number>(ambulanceBlocks).fill(known)),
  byAmbulance: [0, 1].map(() => reference.shares.map((share) => Math.round(share * known))),
};
const night = { name: 'Night', from: from + 21 * hour, to: from + 31 * hour };
const week = { name: 'week', from, to: from + 168 * hour };

const keys = ['p2_5', 'p10', 'p25', 'p50', 'p75', 'p90', 'p97_5'] as const;

/** 20,000 draws leave a percentile uncertain by about 2 % of a standard deviation at the ends; five of that, and one for the step. */
function expectPercentiles(actual: ArrivalPercentiles, expected: readonly number[], label: string): void {
  const sd = (expected[6] - expected[0]) / 3.92;
  keys.forEach((key, i) => expectWithin(actual[key], expected[i], 1 + 0.1 * sd, `${label}, ${key}`));
}

describe('gamma factor by calendar day', () => {
  const expected = reference['gamma by calendar day'];
  const forecast = forecastArrivals({
    model: buildExactArrivals('gamma by calendar day', Math.log1p(reference.phi), 0, monday - 24),
    zone,
    fromUtc: from,
    toUtc: from + 168 * hour,
    calendar: [],
    shifts: [night, week],
    ambulance,
    draws: 20_000,
    seed: 3,
  });

  it('has the percentiles of an hour, a day, one area, a night across midnight and a week', () => {
    expectPercentiles(forecast.hours[12].total, expected.hour, 'Monday 12:00');
    expectPercentiles(forecast.days[0].total, expected.day, 'Monday');
    expectPercentiles(forecast.days[0].areas[0], expected['day, area 0'], 'Monday, area 0');
    expectPercentiles(forecast.shifts[0].total, expected.night, 'Monday night');
    expectPercentiles(forecast.shifts[1].total, expected.week, 'the week');
  });

  it('does not add up percentiles: a day’s interval is narrower than its hours’ ends added, and wider than if they were independent', () => {
    const added = (key: (typeof keys)[number]): number =>
      forecast.hours.slice(0, 24).reduce((sum, { total }) => sum + total[key], 0);
    expectWithin(added('p97_5'), expected['sum of hourly percentiles'][6], 24, 'hourly ends added');
    const day = forecast.days[0].total;
    expect(day.p97_5).toBeLessThan(added('p97_5') - 50);
    const poisson = 1.96 * Math.sqrt(day.mean);
    expect(day.p97_5 - day.p50).toBeGreaterThan(1.5 * poisson);
  });

  it('tells ambulances apart by thinning', () => {
    const first = forecast.days[0].ambulance;
    if (first === null) throw new Error('no ambulances');
    expectPercentiles(first, expected['day, by ambulance'], 'Monday, by ambulance');
  });
});

describe('log-AR(1) factor on 6 h blocks', () => {
  const expected = reference['log-AR(1) on 6 h blocks'];

  it('has the percentiles of a day and a week', () => {
    // Training ends a day before, so that the factor has its stationary law throughout.
    const { variance, correlation } = reference;
    const forecast = forecastArrivals({
      model: buildExactArrivals('log-AR(1) on 6 h blocks', variance, correlation, monday - 240),
      zone,
      fromUtc: from,
      toUtc: from + 168 * hour,
      calendar: [],
      shifts: [week],
      draws: 20_000,
      seed: 4,
    });
    expectPercentiles(forecast.days[0].total, expected.day, 'Monday');
    expectPercentiles(forecast.shifts[0].total, expected.week, 'the week');
    expect(forecast.days[0].ambulance).toBeNull();
  });
});
