import { gammaPoissonForecast, type CountForecast } from './count-forecast.ts';
import { fitDispersion } from './fit-dispersion.ts';

/** The rules that need and daily arrivals are compared with: each knows a week ahead. */
export const pastRules = { lastWeek: 1, fourWeeks: 4, year: 52 } as const;
export type PastRule = keyof typeof pastRules;
export const pastRuleNames = Object.keys(pastRules) as PastRule[];

const leastMean = 0.1;
/** Weeks of past forecasts that the dispersion of a rule is fitted on. */
const dispersionWeeks = 26;
/** Below this many a rule's spread is a guess, and it is not compared. */
const leastPairs = 40;

/**
 * Forecasts by rules of the past for a series with one figure a step, each gamma–Poisson with its dispersion fitted by maximum
 * likelihood on the rule's own forecasts of the half year before the week that is forecast.
 * @param valueAt the figure at a step, NaN where it is not known
 * @param period steps in a week: 168 hours or 7 days
 * @param stride every how many steps the dispersion is fitted on
 * @returns a function of step and first step of its week; null where the log does not reach back far enough.
 * Cost: one fit a rule and week; a forecast looks at `weeks` figures.
 */
export function makePastBaselines(
  valueAt: (step: number) => number,
  period: number,
  stride: number,
): (rule: PastRule, step: number, weekStart: number) => CountForecast | null {
  const means = new Map<string, number>();
  const meanOf = (rule: PastRule, step: number): number => {
    const key = `${rule} ${step}`;
    const kept = means.get(key);
    if (kept !== undefined) return kept;
    let sum = 0;
    let n = 0;
    for (let w = 1; w <= pastRules[rule]; w += 1) {
      const value = valueAt(step - w * period);
      if (Number.isNaN(value)) continue;
      sum += value;
      n += 1;
    }
    const mean = n >= Math.min(4, pastRules[rule]) ? Math.max(leastMean, sum / n) : NaN;
    means.set(key, mean);
    return mean;
  };
  const dispersions = new Map<string, number | null>();
  const dispersionOf = (rule: PastRule, weekStart: number): number | null => {
    const key = `${rule} ${weekStart}`;
    const kept = dispersions.get(key);
    if (kept !== undefined) return kept;
    const expected: number[] = [];
    const observed: number[] = [];
    for (let step = weekStart - dispersionWeeks * period; step < weekStart; step += stride) {
      const mean = meanOf(rule, step);
      const value = valueAt(step);
      if (Number.isNaN(mean) || Number.isNaN(value)) continue;
      expected.push(mean);
      observed.push(value);
    }
    const phi = expected.length >= leastPairs ? fitDispersion(expected, observed, 0.1) : null;
    dispersions.set(key, phi);
    return phi;
  };
  return (rule, step, weekStart) => {
    const mean = meanOf(rule, step);
    if (Number.isNaN(mean)) return null;
    const phi = dispersionOf(rule, weekStart);
    return phi === null ? null : gammaPoissonForecast(mean, phi);
  };
}
