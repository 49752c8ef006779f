import { describe, expect, it } from 'vitest';
import type { ArrivalModel, HourlyCounts } from '../../../shared/forecasting/arrival-model.ts';
import { arrivalDiagnostics } from '../../../shared/forecasting/arrival-diagnostics.ts';
import { firstHours } from '../../../shared/forecasting/first-hours.ts';
import { fitArrivals } from '../../../shared/forecasting/fit-arrivals.ts';
import { expectedRates } from '../../../shared/forecasting/rate-draws.ts';
import { gridOfLocalHours } from '../../../shared/forecasting/rate-grid.ts';
import { refreshLevel } from '../../../shared/forecasting/refresh-level.ts';
import type { CalendarDay } from '../../../shared/forecasting/visit-table.ts';
import { weeklyRates } from '../../../shared/forecasting/weekly-rates.ts';
import { localDate } from '../../../shared/domain/zoned-time.ts';
import { drawPoisson } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { firstMonday, numbersOf, simulateArrivals } from '../../support/simulate-arrivals.ts';

const hoursFlat = (days: number, rate: (hour: number) => number): HourlyCounts => ({
  firstLocalHour: firstMonday,
  exposureHours: new Float64Array(days * 24).fill(1),
  counts: [Float64Array.from({ length: days * 24 }, (_, i) => rate(i))],
});

describe('recovery from simulated logs', () => {
  it('posterior intervals of the rates hold the truth in 92–98 % of cells, and φ is not biased (the simulated truth)', () => {
    const phi = 0.01;
    const logs = 24;
    let inside = 0;
    const found: number[] = [];
    for (let seed = 0; seed < logs; seed += 1) {
      const { counts, rates } = simulateArrivals({
        seed: 500 + seed,
        weeks: 40,
        perDay: [100],
        phi,
        levelSdPerDay: 0.003,
      });
      const model = fitArrivals({ counts, calendar: [] });
      const { low, high } = weeklyRates(model, 0);
      rates[0].forEach((rate, hour) => (inside += rate >= low[hour] && rate <= high[hour] ? 1 : 0));
      // The posterior mean of the variance, as it is drawn: log-normal about its mode.
      found.push(Math.expm1(model.factorVariance * Math.exp(2 * model.factorLogSdError ** 2)));
    }
    const share = inside / (logs * 168);
    expect(share).toBeGreaterThan(0.92);
    expect(share).toBeLessThan(0.98);
    const mean = found.reduce((sum, value) => sum + value, 0) / logs;
    const se = Math.sqrt(found.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (logs - 1) / logs);
    expect(Math.abs(mean - phi), `mean φ ${mean}, standard error ${se}`).toBeLessThan(2 * se);
  });

  it('finds what areas share and what each has of its own, and each area’s level', () => {
    const truth = simulateArrivals({ seed: 4, weeks: 104, perDay: [90, 50, 30], phi: 0.008, ownPhi: 0.012 });
    const model = fitArrivals({ counts: truth.counts, calendar: [] });
    expectRelative(Math.expm1(model.factorVariance), 0.008, 0.35, 'shared');
    model.areas.forEach((area, a) => {
      expectRelative(area.factorVariance, 0.012, 0.5, `own, area ${a}`);
      const { ratePerHour } = weeklyRates(model, a);
      const sum = (values: readonly number[]): number => values.reduce((all, value) => all + value, 0);
      expectRelative(sum(ratePerHour), sum(truth.rates[a]), 0.04, `level, area ${a}`);
    });
    expect(model.structure).toBe('gamma by calendar day');
  });

  it('counts the repeated hour as two and the skipped one as none', () => {
    // Every Sunday 01:00 of this log lasts two hours, and 02:00 none.
    const exposure = (localHour: number): number => {
      const hour = (localHour - firstMonday) % 168;
      return hour === 145 ? 2 : hour === 146 ? 0 : 1;
    };
    const { counts, rates } = simulateArrivals({ seed: 6, weeks: 60, perDay: [240], exposure });
    const { ratePerHour } = weeklyRates(fitArrivals({ counts, calendar: [] }), 0);
    expectRelative(ratePerHour[145], rates[0][145], 0.15, 'the hour of two');
    expectRelative(ratePerHour[146], rates[0][146], 0.3, 'the hour of none, from its neighbours');
  });
});

describe('holidays and stated events', () => {
  const day = (d: number): string => localDate((firstMonday / 24 + d) * 86_400);
  const holiday = (d: number, name: string): CalendarDay => ({
    date: day(d),
    kind: 'public holiday',
    name,
    statedEffect: null,
  });
  // Every seventh week a holiday, each with three fifths of the usual arrivals.
  const days = 2 * 364;
  const holidays = Array.from({ length: 14 }, (_, k) => holiday(10 + 49 * k, `Day ${k % 7}`));
  const stream = makeStream(12);
  const quiet = new Set(holidays.map(({ date }) => date));
  const counts = hoursFlat(days, (i) => drawPoisson(stream, 6 * (quiet.has(day(Math.floor(i / 24))) ? 0.6 : 1)));
  const model = fitArrivals({ counts, calendar: holidays });
  const rateOn = (d: number, calendar: CalendarDay[]): number => {
    const grid = gridOfLocalHours(firstMonday + d * 24, new Float64Array(24).fill(1));
    return expectedRates(model, grid, calendar)[0].reduce((sum, rate) => sum + rate, 0) / 24;
  };

  it('a holiday takes the effect that holidays had, a new one most of it', () => {
    expectRelative(rateOn(days + 3, []), 6, 0.06, 'an ordinary day');
    expectRelative(rateOn(days + 3, [holiday(days + 3, 'Day 1')]), 3.6, 0.08, 'a known holiday');
    expectRelative(rateOn(days + 3, [holiday(days + 3, 'Never seen')]), 3.6, 0.1, 'a new holiday');
  });

  it('a stated event acts by its stated range', () => {
    const fair: CalendarDay = { date: day(days + 3), kind: 'local event', name: 'Fair', statedEffect: [1.2, 1.4] };
    expectRelative(rateOn(days + 3, [fair]) / rateOn(days + 3, []), Math.sqrt(1.2 * 1.4), 0.02, 'middle of the range');
    const nonsense: CalendarDay = { ...fair, statedEffect: [1.4, 1.2] };
    expect(() => rateOn(days + 3, [nonsense])).toThrow(/Fair/);
  });
});

describe('refreshing the level', () => {
  const truth = simulateArrivals({ seed: 31, weeks: 60, perDay: [80, 40], phi: 0.005, ownPhi: 0.005 });
  const trained = fitArrivals({ counts: firstHours(truth.counts, 40 * 168), calendar: [] });

  it('in two steps is the same as in one, and knows nothing twice', () => {
    const once = refreshLevel(trained, truth.counts);
    const half = refreshLevel(trained, firstHours(truth.counts, 50 * 168));
    const twice = refreshLevel(half, truth.counts);
    twice.site.mean.forEach((value, i) => expectWithin(value, once.site.mean[i], 1e-9, `state ${i}`));
    twice.site.covariance.forEach((value, i) => expectWithin(value, once.site.covariance[i], 1e-9, `covariance ${i}`));
    expect(once.endLocalHour).toBe(firstMonday + 60 * 168);
    expectWithin(once.weeksOfHistory, 60, 1e-9, 'weeks');
    expect(refreshLevel(once, truth.counts)).toBe(once);
    expect(once.areas[0].profile).toEqual(trained.areas[0].profile);
  });

  it('follows a level that has moved', () => {
    const busier = firstHours(truth.counts, 60 * 168);
    const stream = makeStream(2);
    for (const arrivals of busier.counts) {
      for (let i = 40 * 168; i < arrivals.length; i += 1) arrivals[i] += drawPoisson(stream, 0.3 * arrivals[i]);
    }
    const sum = (model: ArrivalModel): number => weeklyRates(model, 0).ratePerHour.reduce((all, rate) => all + rate, 0);
    expectRelative(sum(refreshLevel(trained, busier)) / sum(trained), 1.3, 0.08, 'level');
  });

  it('grows less certain over a gap, and refuses another number of areas', () => {
    const gap: HourlyCounts = {
      firstLocalHour: firstMonday + 70 * 168,
      exposureHours: new Float64Array(24),
      counts: [new Float64Array(24), new Float64Array(24)],
    };
    const later = refreshLevel(trained, gap);
    expect(later.site.covariance[0]).toBeGreaterThan(trained.site.covariance[0]);
    expect(() => refreshLevel(trained, { ...gap, counts: [gap.counts[0]] })).toThrow(/areas/);
  });
});

describe('bad input', () => {
  it('is refused by name', () => {
    expect(() => fitArrivals({ counts: hoursFlat(13, () => 3), calendar: [] })).toThrow(/two weeks.*1\.9/);
    expect(() => fitArrivals({ counts: hoursFlat(21, (i) => (i === 30 ? NaN : 3)), calendar: [] })).toThrow(
      /area 0: hour 30 is NaN/,
    );
    expect(() => fitArrivals({ counts: hoursFlat(21, (i) => (i === 31 ? -1 : 3)), calendar: [] })).toThrow(
      /hour 31 is -1/,
    );
    expect(() => fitArrivals({ counts: hoursFlat(21, () => 2.5), calendar: [] })).toThrow(/hour 0 is 2.5/);
    const closed = hoursFlat(21, () => 2);
    closed.exposureHours[7] = 0;
    expect(() => fitArrivals({ counts: closed, calendar: [] })).toThrow(/hour 7 has 2 arrivals but no exposure/);
    expect(() => fitArrivals({ counts: { ...closed, counts: [] }, calendar: [] })).toThrow(/no area/);
    expect(() =>
      fitArrivals({
        counts: hoursFlat(21, () => 2),
        calendar: [{ date: '2019-02-30', kind: 'closure', name: 'Works', statedEffect: null }],
      }),
    ).toThrow(/2019-02-30/);
  });

  it.each([
    ['an empty area', () => 0, /no arrivals/],
    ['one visit', (i: number) => (i === 100 ? 1 : 0), /only 1 arrivals/],
    ['all visits in one hour', (i: number) => (i === 100 ? 5000 : 0), /single hour/],
    ['all visits in one hour of the day', (i: number) => (i % 24 === 3 ? 40 : 0), /eight weeks/],
    ['a constant count', () => 4, /eight weeks/],
  ])('%s: an answer with a caution, no number that is none', (_, rate, caution) => {
    const model = fitArrivals({ counts: hoursFlat(28, rate), calendar: [] });
    expect(numbersOf(model).every(Number.isFinite)).toBe(true);
    expect(model.cautions.join(' ')).toMatch(caution);
    const grid = gridOfLocalHours(model.endLocalHour, new Float64Array(36).fill(1));
    for (const value of expectedRates(model, grid, [])[0]) {
      expect(value).toBeGreaterThan(0);
      expect(value).toBeLessThan(10_000);
    }
    const { findings } = arrivalDiagnostics(model, hoursFlat(28, rate));
    expect(JSON.stringify(findings)).not.toMatch(/NaN|Infinity/);
  });

  it('two to eight weeks give a coarse profile, more a fine one', () => {
    const { counts } = simulateArrivals({ seed: 1, weeks: 9, perDay: [50] });
    expect(fitArrivals({ counts: firstHours(counts, 7 * 168), calendar: [] }).coarse).toBe(true);
    expect(fitArrivals({ counts, calendar: [] }).coarse).toBe(false);
  });

  it('a model is plain JSON', () => {
    const { counts } = simulateArrivals({ seed: 1, weeks: 60, perDay: [50, 20], phi: 0.01 });
    const model = fitArrivals({ counts, calendar: [] });
    expect(JSON.parse(JSON.stringify(model))).toEqual(model);
  });
});

describe('diagnostics', () => {
  it('tell a Poisson log from one with busy and quiet days, in effect sizes', () => {
    const calm = simulateArrivals({ seed: 3, weeks: 80, perDay: [120] });
    const wild = simulateArrivals({ seed: 3, weeks: 80, perDay: [120], phi: 0.02 });
    const of = ({ counts }: typeof calm) => arrivalDiagnostics(fitArrivals({ counts, calendar: [] }), counts);
    // Day totals of mean 120 with φ = 0.02 vary 1 + 120 φ = 3.4 times Poisson.
    expectRelative(of(wild).dayDispersion, 3.4, 0.2, 'days, wild');
    expectRelative(of(calm).dayDispersion, 1, 0.15, 'days, calm');
    expectRelative(of(wild).sharedCv, Math.sqrt(0.02), 0.2, 'coefficient of variation');
    expect(of(calm).findings.some(({ concern }) => concern)).toBe(false);
  });

  it('un-round whole minutes before testing, and see batches for what they are', () => {
    const { counts } = simulateArrivals({ seed: 9, weeks: 20, perDay: [100] });
    const model = fitArrivals({ counts, calendar: [] });
    const stream = makeStream(77);
    const times: number[] = [];
    const batches: number[] = [];
    counts.counts[0].forEach((n, i) => {
      const start = (firstMonday + i) * 3600;
      for (let k = 0; k < n; k += 1) {
        times.push(start + 60 * Math.floor(60 * stream.uniform()));
        batches.push(start + 900 * Math.floor(4 * stream.uniform()));
      }
    });
    const rounded = arrivalDiagnostics(model, counts, Float64Array.from(times)).withinHour;
    expect(rounded?.minutesRounded).toBe(1);
    expect(Math.max(rounded?.conditionalUniform ?? 1, rounded?.lewis ?? 1, rounded?.log ?? 1)).toBeLessThan(0.05);
    const batched = arrivalDiagnostics(model, counts, Float64Array.from(batches)).withinHour;
    expect(batched?.conditionalUniform).toBeGreaterThan(0.1);
  });
});
