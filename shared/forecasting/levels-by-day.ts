import type { EffectPrior } from './arrival-model.ts';
import { gatherBlocks, type HourlyExpectation } from './block-series.ts';
import type { CalendarIndex } from './calendar-effect.ts';
import { effectSum, filterLevel, firstEffect, firstState, smoothLevel, type LevelDynamics } from './level-filter.ts';

const daily = { hours: 24, cut: 0 };

/**
 * Effects and smoothed level by day, given profiles: filtered effects first, then the level smoothed about them.
 * @returns effect sizes in the order of the priors, what multiplied the rate each day, and the log score of the series
 *   (log probability of every hour, each day given those before it; higher is better).
 */
export function levelsByDay(
  hourly: HourlyExpectation,
  index: CalendarIndex,
  priors: readonly EffectPrior[],
  dynamics: LevelDynamics,
): { effects: number[]; dayFactor: Float64Array; score: number } {
  const keys = priors.map(({ key }) => key);
  const series = gatherBlocks(hourly, daily, index, keys);
  const run = filterLevel(series, dynamics, firstState(priors, dynamics.factorVariance, dynamics.spellVariance));
  const effects = run.state.mean.slice(firstEffect);
  const level = smoothLevel(series, dynamics, effects);
  const dayFactor = level.map((value, k) => Math.exp(value + effectSum(series, k, effects)));
  return { effects, dayFactor, score: run.logProbability + series.withinLogProbability };
}
