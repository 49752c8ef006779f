import { hoursOfWeek } from '../domain/hour-of-week.ts';
import { makeStream } from '../stochastic/random.ts';
import type { ArrivalModel, ArrivalSettings, HourlyCounts } from './arrival-model.ts';
import { baselineNames, makeBaselines, type BaselineName } from './baselines.ts';
import { indexCalendar } from './calendar-effect.ts';
import { forecastFromDraws, type CountForecast } from './count-forecast.ts';
import { countLevels, hoursPerLevel, sumRuns, type CountLevel } from './count-levels.ts';
import { firstHours } from './first-hours.ts';
import { fitArrivals } from './fit-arrivals.ts';
import { makeRateDraw } from './rate-draws.ts';
import { scoreCount, summariseScores, type ScoredCount, type ScoreSummary } from './score-summary.ts';
import type { CalendarDay } from './visit-table.ts';

export interface ArrivalEvaluation {
  model: Record<CountLevel, ScoreSummary>;
  baselines: Record<BaselineName, Record<CountLevel, ScoreSummary>>;
  /** Day totals by how many days ahead they were forecast, 1 to 14. */
  byLead: { daysAhead: number; score: ScoreSummary }[];
  /** First local hour scored, and the hour after the last. */
  fromLocalHour: number;
  toLocalHour: number;
  /** Settings as chosen at each choice, with the origin's local hour. */
  choices: { originLocalHour: number; settings: ArrivalSettings }[];
}

export interface EvaluationOptions {
  /** Weeks scored, the last of the counts. */
  weeks: number;
  /** Joint draws behind each forecast. */
  draws: number;
  seed: number;
  /** Weeks after which the settings are chosen anew, on what came before. */
  chooseEveryWeeks: number;
  onProgress?: (share: number) => void;
}

export const usualEvaluation: EvaluationOptions = { weeks: 52, draws: 2000, seed: 1, chooseEveryWeeks: 13 };

/**
 * Rolling-origin evaluation of one site's arrivals: before each of the last weeks the model is fitted on what came before
 * and its forecast of the week scored at hour, shift, day and week, beside the baselines; days also 1–14 ahead.
 * Hours without exposure are not scored. Areas are summed: totals come from the joint draws.
 * Throws a RangeError when less than eight weeks are left before the first origin.
 * Cost: weeks × (one fit with known settings + draws × 336 hours), about half a second a week.
 */
export function evaluateArrivals(
  counts: HourlyCounts,
  calendar: readonly CalendarDay[],
  options: Partial<EvaluationOptions> = {},
): ArrivalEvaluation {
  const { weeks, draws, seed, chooseEveryWeeks, onProgress } = { ...usualEvaluation, ...options };
  const length = counts.exposureHours.length;
  const firstOrigin = length - weeks * hoursOfWeek;
  if (!(Number.isInteger(weeks) && weeks >= 1))
    throw new RangeError(`weeks must be a whole number from 1, got ${weeks}`);
  if (firstOrigin < 8 * hoursOfWeek) {
    throw new RangeError(
      `${weeks} weeks of evaluation need 8 weeks before them; the log has ${(length / hoursOfWeek).toFixed(1)}`,
    );
  }
  const total = new Float64Array(length);
  for (const arrivals of counts.counts) for (let i = 0; i < length; i += 1) total[i] += arrivals[i];
  const site: HourlyCounts = {
    firstLocalHour: counts.firstLocalHour,
    exposureHours: counts.exposureHours,
    counts: [total],
  };
  const baselines = makeBaselines(site, indexCalendar(calendar, 0));

  const empty = (): Record<CountLevel, ScoredCount[]> => ({ hour: [], shift: [], day: [], week: [] });
  const modelScores = empty();
  const baselineScores = Object.fromEntries(baselineNames.map((name) => [name, empty()])) as Record<
    BaselineName,
    Record<CountLevel, ScoredCount[]>
  >;
  const leads: ScoredCount[][] = Array.from({ length: 14 }, () => []);
  const choices: ArrivalEvaluation['choices'] = [];

  for (let week = 0; week < weeks; week += 1) {
    const origin = firstOrigin + week * hoursOfWeek;
    const past = firstHours(counts, origin);
    let model: ArrivalModel;
    if (week % chooseEveryWeeks === 0) {
      model = fitArrivals({ counts: past, calendar });
      choices.push({ originLocalHour: counts.firstLocalHour + origin, settings: model.settings });
    } else {
      model = fitArrivals({ counts: past, calendar, settings: choices[choices.length - 1].settings });
    }
    const ahead = Math.min(2 * hoursOfWeek, length - origin);
    const forecasts = forecastSums(model, counts, origin, ahead, calendar, draws, seed + week);
    const base = baselines(origin);
    for (const level of countLevels) {
      const width = hoursPerLevel[level];
      const observed = sumRuns(total, origin, origin + hoursOfWeek, width);
      const naive = sumRuns(total, origin - hoursOfWeek, origin, width);
      const exposure = sumRuns(counts.exposureHours, origin, origin + hoursOfWeek, width);
      for (let i = 0; i < observed.length; i += 1) {
        if (!(exposure[i] > 0)) continue;
        modelScores[level].push(scoreCount(forecasts[level][i], observed[i], week, naive[i]));
        for (const name of baselineNames) {
          baselineScores[name][level].push(scoreCount(base[name][level][i], observed[i], week, naive[i]));
        }
      }
    }
    const days = sumRuns(total, origin, origin + ahead, 24);
    for (let d = 0; d < days.length; d += 1) {
      const at = origin + 24 * d;
      const naive = sumRuns(
        total,
        at - hoursOfWeek * Math.ceil((d + 1) / 7),
        at - hoursOfWeek * Math.ceil((d + 1) / 7) + 24,
        24,
      );
      if (counts.exposureHours[at] > 0) leads[d].push(scoreCount(forecasts.day[d], days[d], week, naive[0]));
    }
    onProgress?.((week + 1) / weeks);
  }

  const summarise = (scores: Record<CountLevel, ScoredCount[]>): Record<CountLevel, ScoreSummary> => ({
    hour: summariseScores(scores.hour, 500, seed),
    shift: summariseScores(scores.shift, 500, seed),
    day: summariseScores(scores.day, 500, seed),
    week: summariseScores(scores.week, 500, seed),
  });
  return {
    model: summarise(modelScores),
    baselines: {
      sameHourLastWeek: summarise(baselineScores.sameHourLastWeek),
      fourWeekMean: summarise(baselineScores.fourWeekMean),
      yearMean: summarise(baselineScores.yearMean),
      regression: summarise(baselineScores.regression),
    },
    byLead: leads.map((scores, d) => ({ daysAhead: d + 1, score: summariseScores(scores, 500, seed) })),
    fromLocalHour: counts.firstLocalHour + firstOrigin,
    toLocalHour: counts.firstLocalHour + length,
    choices,
  };
}

/** Forecasts of the site's sums at every level, all from the same joint draws of rates. `origin` and `hours` are places in the counts. */
export function forecastSums(
  model: ArrivalModel,
  counts: HourlyCounts,
  origin: number,
  hours: number,
  calendar: readonly CalendarDay[],
  draws: number,
  seed: number,
): Record<CountLevel, CountForecast[]> {
  // Hours of any length stand in the grid, those of none as well, so that places match.
  const first = counts.firstLocalHour + origin;
  const grid = {
    localHour: Int32Array.from({ length: hours }, (_, i) => first + i),
    startAt: Float64Array.from({ length: hours }, (_, i) => (first + i) * 3600),
    hours: counts.exposureHours.slice(origin, origin + hours),
  };
  const draw = makeRateDraw(model, grid, calendar);
  const rates = model.areas.map(() => new Float64Array(hours));
  const sums = countLevels.map((level) =>
    Array.from({ length: Math.floor(hours / hoursPerLevel[level]) }, () => new Float64Array(draws)),
  );
  const widths = countLevels.map((level) => hoursPerLevel[level]);
  const hourly = new Float64Array(hours);
  for (let r = 0; r < draws; r += 1) {
    draw(makeStream(seed, 11, r), rates);
    for (let i = 0; i < hours; i += 1) {
      let mean = 0;
      for (let a = 0; a < rates.length; a += 1) {
        mean += rates[a][i] * (counts.areaExposure?.[a][origin + i] ?? grid.hours[i]);
      }
      hourly[i] = mean;
    }
    for (let l = 0; l < widths.length; l += 1) {
      const own = sums[l];
      const width = widths[l];
      for (let k = 0; k < own.length; k += 1) {
        let sum = 0;
        for (let i = k * width; i < (k + 1) * width; i += 1) sum += hourly[i];
        own[k][r] = sum;
      }
    }
  }
  const byLevel = countLevels.map((level, l) => [level, sums[l].map((means) => forecastFromDraws(means))] as const);
  return Object.fromEntries(byLevel) as Record<CountLevel, CountForecast[]>;
}
