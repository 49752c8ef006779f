import { describe, expect, it } from 'vitest';
import type { ArrivalModel } from '../../../shared/forecasting/arrival-model.ts';
import { fitArrivals } from '../../../shared/forecasting/fit-arrivals.ts';
import { forecastArrivals } from '../../../shared/forecasting/forecast-arrivals.ts';
import { liveGammaFactor } from '../../../shared/forecasting/live-factor.ts';
import { expectedRates, makeRateDraw } from '../../../shared/forecasting/rate-draws.ts';
import { makeRateGrid } from '../../../shared/forecasting/rate-grid.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { simulateArrivals } from '../../support/simulate-arrivals.ts';

const zone = makeZone('Europe/London');
const { counts } = simulateArrivals({ seed: 2, weeks: 60, perDay: [90, 50], phi: 0.01, ownPhi: 0.01 });
const gamma = fitArrivals({ counts, calendar: [], settings: { structure: 'gamma by calendar day' } });
const blocks = fitArrivals({
  counts,
  calendar: [],
  settings: { structure: 'log-AR(1) on 6 h blocks', factorVariance: 0.01, factorCorrelation: 0.7 },
});
const end = zone.fromLocal(gamma.endLocalHour * 3600)[0];

function drawn(
  model: ArrivalModel,
  from: number,
  to: number,
  draws: number,
  live?: Parameters<typeof makeRateDraw>[3],
) {
  const grid = makeRateGrid(zone, from, to);
  const draw = makeRateDraw(model, grid, [], live);
  const rates = model.areas.map(() => new Float64Array(grid.localHour.length));
  const sums: { total: number[]; areas: number[][] } = { total: [], areas: model.areas.map(() => []) };
  const means = rates.map((own) => own.map(() => 0));
  for (let r = 0; r < draws; r += 1) {
    draw(makeStream(9, r), rates);
    let total = 0;
    rates.forEach((own, a) => {
      let sum = 0;
      own.forEach((rate, i) => {
        sum += rate * grid.hours[i];
        means[a][i] += rate / draws;
      });
      sums.areas[a].push(sum);
      total += sum;
    });
    sums.total.push(total);
  }
  return { grid, means, sums };
}

const meanOf = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
const varianceOf = (values: readonly number[]): number => {
  const mean = meanOf(values);
  return values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1);
};

describe.each([
  ['gamma by day', gamma],
  ['AR(1) blocks', blocks],
] as const)('joint draws, %s', (_, model) => {
  const { grid, means, sums } = drawn(model, end, end + 36 * 3600, 20_000);

  it('have the means that expectedRates gives', () => {
    // Single rates vary by 10–15 %, so 20,000 draws leave 0.1 %; five standard errors.
    expectedRates(model, grid, []).forEach((own, a) => {
      own.forEach((rate, i) => expectRelative(means[a][i], rate, 0.006, `area ${a}, stretch ${i}`));
    });
  });

  it('carry what areas share: the total varies more than independent areas would', () => {
    const apart = sums.areas.reduce((sum, own) => sum + varianceOf(own), 0);
    expect(varianceOf(sums.total)).toBeGreaterThan(1.2 * apart);
  });

  it('are the same for the same stream, and grow no NaN', () => {
    const draw = makeRateDraw(model, grid, []);
    const once = model.areas.map(() => new Float64Array(grid.localHour.length));
    const twice = model.areas.map(() => new Float64Array(grid.localHour.length));
    draw(makeStream(1, 5), once);
    draw(makeStream(1, 6), twice);
    draw(makeStream(1, 5), twice);
    expect(twice).toEqual(once);
    expect(once.every((own) => own.every((rate) => rate > 0 && rate < 1000))).toBe(true);
  });
});

describe('arrivals already counted', () => {
  const now = end + 18 * 3600;
  const before = makeRateGrid(zone, end, now);
  const expected = (model: ArrivalModel): number =>
    expectedRates(model, before, []).reduce(
      (sum, own) => own.reduce((all, rate, i) => all + rate * before.hours[i], sum),
      0,
    );

  it('gamma: move the rest of the day by the conjugate update, and leave the next day alone', () => {
    const mean = expected(gamma);
    const count = Math.round(1.3 * mean);
    const live = { grid: before, total: count };
    const later = makeRateGrid(zone, now, end + 48 * 3600);
    const without = expectedRates(gamma, later, []);
    const withLive = expectedRates(gamma, later, [], live);
    // Λ is what a factor of 1 at the level's mean would bring; E[exp] of the factor is within 1 % of 1.
    const factor = liveGammaFactor(Math.expm1(gamma.factorVariance), count, mean).mean;
    expectRelative(withLive[0][0] / without[0][0], factor, 0.005, 'rest of the day');
    expectRelative(withLive[0][20] / without[0][20], 1, 1e-9, 'next day');
    const { means } = drawn(gamma, now, end + 48 * 3600, 20_000, live);
    expectRelative(means[0][0], withLive[0][0], 0.006, 'draws');
  });

  it('AR(1): move the coming hours most, later ones less, across midnight too', () => {
    const live = { grid: before, total: Math.round(1.3 * expected(blocks)) };
    const later = makeRateGrid(zone, now, end + 48 * 3600);
    const ratio = expectedRates(blocks, later, [], live)[0].map(
      (rate, i) => rate / expectedRates(blocks, later, [])[0][i],
    );
    expect(ratio[0]).toBeGreaterThan(1.05);
    expect(ratio[8]).toBeGreaterThan(1.005);
    expect(ratio[0]).toBeGreaterThan(ratio[12]);
    expect(ratio[12]).toBeGreaterThan(ratio[28]);
  });

  it('as expected narrow what is left, and nonsense is refused', () => {
    const mean = Math.round(expected(blocks));
    const apart = drawn(blocks, now, now + 4 * 3600, 4000).sums.total;
    const known = drawn(blocks, now, now + 4 * 3600, 4000, { grid: before, total: mean }).sums.total;
    expect(varianceOf(known)).toBeLessThan(varianceOf(apart));
    expect(() => expectedRates(blocks, before, [], { grid: before, total: NaN })).toThrow(/live arrivals.*NaN/);
    expect(() => expectedRates(blocks, before, [], { grid: before, total: [1, 2] })).toThrow(/2 counts/);
  });
});

describe('forecast of arrivals', () => {
  // Across the autumn clock change of 2020-10-25, when the local day has 25 hours.
  const from = zone.fromLocal(Date.parse('2020-10-24T00:00Z') / 1000)[0];
  const to = zone.fromLocal(Date.parse('2020-10-27T00:00Z') / 1000)[0];
  const shifts = [{ name: 'Night', from: from + 21.5 * 3600, to: from + 31.5 * 3600 }];
  const forecast = forecastArrivals({
    model: gamma,
    zone,
    fromUtc: from,
    toUtc: to,
    calendar: [],
    shifts,
    draws: 2000,
    seed: 4,
  });

  it('has every hour, the shift, three days of which one has 25 hours, and the whole', () => {
    expect(forecast.hours).toHaveLength(73);
    expect(forecast.days.map(({ name, from: start, to: stop }) => [name, (stop - start) / 3600])).toEqual([
      ['2020-10-24', 24],
      ['2020-10-25', 25],
      ['2020-10-26', 24],
    ]);
    expect(forecast.shifts).toHaveLength(1);
    expect(forecast.whole.to).toBe(to);
  });

  it('means add up, percentiles do not: a day is not 24 independent hours', () => {
    const hours = forecast.hours.slice(0, 24);
    expectWithin(
      hours.reduce((sum, hour) => sum + hour.total.mean, 0),
      forecast.days[0].total.mean,
      0.01,
      'means',
    );
    const width = (one: { p2_5: number; p97_5: number }): number => one.p97_5 - one.p2_5;
    const independent = Math.sqrt(hours.reduce((sum, hour) => sum + width(hour.total) ** 2, 0));
    expect(width(forecast.days[0].total)).toBeGreaterThan(1.1 * independent);
    expect(width(forecast.days[0].total)).toBeLessThan(hours.reduce((sum, hour) => sum + width(hour.total), 0));
    for (const span of [...forecast.hours, ...forecast.days, forecast.whole]) {
      const { p2_5, p10, p25, p50, p75, p90, p97_5 } = span.total;
      expect([p2_5, p10, p25, p50, p75, p90, p97_5]).toEqual(
        [p2_5, p10, p25, p50, p75, p90, p97_5].sort((a, b) => a - b),
      );
    }
  });

  it('is refused past 24 h with under eight weeks of history', () => {
    const short = simulateArrivals({ seed: 3, weeks: 4, perDay: [60] });
    const model = fitArrivals({ counts: short.counts, calendar: [] });
    const start = zone.fromLocal(model.endLocalHour * 3600)[0];
    const ask = (hours: number) =>
      forecastArrivals({ model, zone, fromUtc: start, toUtc: start + hours * 3600, calendar: [], draws: 100, seed: 1 });
    expect(ask(24).hours).toHaveLength(24);
    expect(() => ask(25)).toThrow(/24 hours/);
  });
});
