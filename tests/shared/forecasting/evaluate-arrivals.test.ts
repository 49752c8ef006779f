import { describe, expect, it } from 'vitest';
import { sameHourMeans } from '../../../shared/forecasting/baselines.ts';
import { countLevels } from '../../../shared/forecasting/count-levels.ts';
import { evaluateArrivals } from '../../../shared/forecasting/evaluate-arrivals.ts';
import { firstHours } from '../../../shared/forecasting/first-hours.ts';
import { expectWithin } from '../../support/closeness.ts';
import { simulateArrivals } from '../../support/simulate-arrivals.ts';

const { counts, rates } = simulateArrivals({ seed: 15, weeks: 40, perDay: [70, 30], phi: 0.006 });

describe('rolling-origin evaluation', () => {
  const result = evaluateArrivals(counts, [], { weeks: 8, draws: 500, chooseEveryWeeks: 8 });

  it('scores every hour, shift, day and week of the model and of each baseline', () => {
    expect(countLevels.map((level) => result.model[level].n)).toEqual([1344, 168, 56, 8]);
    for (const scores of Object.values(result.baselines)) {
      expect(countLevels.map((level) => scores[level].n)).toEqual([1344, 168, 56, 8]);
    }
    expect(result.byLead.map(({ score }) => score.n)).toEqual([
      ...new Array<number>(7).fill(8),
      ...new Array<number>(7).fill(7),
    ]);
    expect(JSON.stringify(result)).not.toMatch(/NaN|null,"mae"/);
  });

  it('the model is near the best that can be had, and beats the rules that look at a few weeks', () => {
    // With the true rates known each hour's Poisson entropy is the floor, the day factor apart (common practice, no source).
    let floor = 0;
    for (let h = 0; h < 168; h += 1) {
      const mean = rates[0][h] + rates[1][h];
      let term = Math.exp(-mean);
      for (let n = 0; n < 200; n += 1) {
        if (term > 0) floor -= (term * Math.log(term)) / 168;
        term *= mean / (n + 1);
      }
    }
    expect(result.model.hour.logScore ?? NaN).toBeLessThan(floor + 0.05);
    for (const name of ['sameHourLastWeek', 'fourWeekMean'] as const) {
      expect(result.model.hour.logScore ?? NaN).toBeLessThan(result.baselines[name].hour.logScore ?? NaN);
      expect(result.model.day.logScore ?? NaN).toBeLessThan(result.baselines[name].day.logScore ?? NaN);
    }
  });

  it('intervals hold their exact mass, within what eight weeks can tell', () => {
    for (const level of ['hour', 'shift', 'day'] as const) {
      const { observed, expected, se } = result.model[level].coverage['0.9'];
      expectWithin(observed ?? NaN, expected ?? NaN, 4 * Math.max(se ?? NaN, 0.02), level);
    }
  });

  it('knows nothing of what comes after an origin', () => {
    // A last week that, being without exposure, is not scored: empty in one log, wild in the other.
    const withLastWeek = (n: number) => {
      const log = firstHours(counts, 40 * 168);
      log.exposureHours.fill(0, 39 * 168);
      for (const arrivals of log.counts) arrivals.fill(n, 39 * 168);
      return evaluateArrivals(log, [], { weeks: 2, draws: 200, chooseEveryWeeks: 8 });
    };
    const calm = withLastWeek(0);
    const wild = withLastWeek(999);
    expect(calm.model.hour.n).toBe(168);
    expect(wild.model).toEqual(calm.model);
    expect(wild.baselines).toEqual(calm.baselines);
    expect(wild.choices).toEqual(calm.choices);
  });

  it('is refused where too little is left before the first origin', () => {
    expect(() => evaluateArrivals(counts, [], { weeks: 33 })).toThrow(/8 weeks before/);
    expect(() => evaluateArrivals(counts, [], { weeks: 0 })).toThrow(/weeks/);
  });
});

describe('same-hour baselines', () => {
  it('are means of rates, so that clock changes do not spoil them', () => {
    const exposureHours = new Float64Array(6 * 168).fill(1);
    const arrivals = exposureHours.map((_, i) => Math.floor(i / 168) + 1);
    exposureHours[2 * 168 + 5] = 2;
    exposureHours[4 * 168 + 5] = 0;
    arrivals[4 * 168 + 5] = 0;
    const one = { firstLocalHour: 17_903 * 24, exposureHours, counts: [arrivals] };
    // Week 5 (from 0): weeks 1–4 hold 2, 3, 4, 5 an hour; at hour 5 week 2 has 3 in two hours and week 4 is missing.
    expect(sameHourMeans(one, 4)[5 * 168 + 6]).toBe(3.5);
    expect(sameHourMeans(one, 4)[5 * 168 + 5]).toBe((2 + 3 + 4) / 4);
    // Last week has no such hour: the week before stands in.
    expect(sameHourMeans(one, 1)[5 * 168 + 5]).toBe(4);
    expect(sameHourMeans(one, 1)[0]).toBeNaN();
  });
});
