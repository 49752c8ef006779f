import { hoursOfWeek } from '../domain/hour-of-week.ts';
import type { HourlyCounts } from './arrival-model.ts';
import { regressionMeans } from './baseline-regression.ts';
import type { CalendarIndex } from './calendar-effect.ts';
import { gammaPoissonForecast, type CountForecast } from './count-forecast.ts';
import { countLevels, hoursPerLevel, sumRuns, type CountLevel } from './count-levels.ts';
import { fitDispersion } from './fit-dispersion.ts';

export const baselineNames = ['sameHourLastWeek', 'fourWeekMean', 'yearMean', 'regression'] as const;
export type BaselineName = (typeof baselineNames)[number];

/** Least mean of an hour: a mean of 0 would hold any arrival impossible. */
const leastHourlyMean = 0.1;
/** Weeks of past forecasts on which the dispersion of a rule is fitted. */
const dispersionWeeks = 52;

/**
 * The mean rate of the same hour over the last `weeks` weeks, for every hour from the second week on: known a week ahead.
 * Rates are per hour of exposure, so clock changes do not spoil them. Hours without any such past are NaN.
 */
export function sameHourMeans(counts: HourlyCounts, weeks: number): Float64Array {
  const arrivals = counts.counts[0];
  const { exposureHours } = counts;
  return arrivals.map((_, i) => {
    let sum = 0;
    let exposure = 0;
    // Beyond the weeks asked for only until one is found that has the hour at all (the skipped hour of spring has not).
    for (let w = 1; (w <= weeks || exposure === 0) && i - w * hoursOfWeek >= 0; w += 1) {
      sum += arrivals[i - w * hoursOfWeek];
      exposure += exposureHours[i - w * hoursOfWeek];
    }
    if (!(exposure > 0)) return NaN;
    return exposureHours[i] * Math.max(leastHourlyMean, sum / exposure);
  });
}

/**
 * Makes the baselines of one site's series. Each is gamma–Poisson at every level, its dispersion fitted at that level by
 * maximum likelihood on its own forecasts of the last year before the origin (regression: on its fit to the training data).
 * @returns forecasts of the week from an origin, by baseline and level. Cost: dominated by the regression's refit.
 */
export function makeBaselines(
  counts: HourlyCounts,
  index: CalendarIndex,
): (origin: number) => Record<BaselineName, Record<CountLevel, CountForecast[]>> {
  const rules = {
    sameHourLastWeek: sameHourMeans(counts, 1),
    fourWeekMean: sameHourMeans(counts, 4),
    yearMean: sameHourMeans(counts, 52),
  };
  let coefficients: Float64Array | undefined;
  return (origin) => {
    const end = origin + hoursOfWeek;
    const from = Math.max(hoursOfWeek + (origin % hoursOfWeek), origin - dispersionWeeks * hoursOfWeek);
    const regression = regressionMeans(counts, index, origin, end, coefficients);
    coefficients = regression.coefficients;
    const all: Record<BaselineName, Float64Array> = { ...rules, regression: regression.means };
    const forecasts = (name: BaselineName): Record<CountLevel, CountForecast[]> => {
      const means = all[name].map((mean) => (Number.isNaN(mean) ? 0 : mean));
      const start = name === 'regression' ? origin % hoursOfWeek : from;
      const byLevel = countLevels.map((level) => {
        const width = hoursPerLevel[level];
        const past = sumRuns(means, start, origin, width);
        const phi = fitDispersion(past, sumRuns(counts.counts[0], start, origin, width));
        return [
          level,
          Array.from(sumRuns(means, origin, end, width), (mean) => gammaPoissonForecast(mean, phi)),
        ] as const;
      });
      return Object.fromEntries(byLevel) as Record<CountLevel, CountForecast[]>;
    };
    return {
      sameHourLastWeek: forecasts('sameHourLastWeek'),
      fourWeekMean: forecasts('fourWeekMean'),
      yearMean: forecasts('yearMean'),
      regression: forecasts('regression'),
    };
  };
}
