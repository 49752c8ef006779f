import { factorStructures, type ArrivalSettings, type FactorStructure } from './arrival-model.ts';
import { blockCuts, gatherBlocks, isAutoregressive, type BlockSeries, type HourlyExpectation } from './block-series.ts';
import type { CalendarIndex } from './calendar-effect.ts';
import { effectSum, filterLevel, firstState, type LevelDynamics } from './level-filter.ts';
import { minimise } from './minimise.ts';

export interface ChosenDynamics extends LevelDynamics {
  structure: FactorStructure;
  factorLogSdError: number;
  scores: { structure: FactorStructure; logScore: number }[];
}

/** Spells last some days: neither the next block nor the next season. */
export const spellCorrelationPerDay = 0.85;

/** How variable days are changes over the years: a past day's score weighs half after so many days. */
const memoryDays = 364;

/** Mild priors, on log, log and logit scales: they decide where little history cannot, and fade with it. */
const priors = {
  levelVariance: { centre: Math.log(3e-5), sd: 1.5 },
  factorVariance: { centre: Math.log(2.5e-3), sd: 2 },
  correlation: { centre: 0, sd: 1 },
  spellVariance: { centre: Math.log(1e-4), sd: 2 },
};

/**
 * Chooses how the factor varies, and how fast the level moves, by the log score of every block given all before it.
 * Scores of different block lengths are comparable: to each block's log probability is added that of its hours given its
 * total, so that every candidate scores the same thing, the hours of the whole series.
 * @param effects effect sizes taken as known here, in the order of `keys`
 * @param given settings that are not to be chosen
 * Cost: a few hundred passes of a two-state filter, about 1 ms each for three years.
 */
export function chooseDynamics(
  hourly: HourlyExpectation,
  index: CalendarIndex,
  keys: readonly string[],
  effects: readonly number[],
  given: Partial<ArrivalSettings>,
): ChosenDynamics {
  const candidates = given.structure === undefined ? factorStructures : [given.structure];
  let best: ChosenDynamics | undefined;
  let bestScore = Infinity;
  let from: readonly number[] = [];
  const scores: ChosenDynamics['scores'] = [];
  const hours = hourly.expected.reduce((n, expected) => n + (expected > 0 ? 1 : 0), 0);
  for (const structure of candidates) {
    const series = withEffectsKnown(gatherBlocks(hourly, blockCuts[structure], index, keys), effects);
    const found = findDynamics(series, structure, given, from);
    from = found.x;
    const score = -(found.logProbability + series.withinLogProbability) / Math.max(hours, 1);
    scores.push({ structure, logScore: score });
    if (score < bestScore) {
      bestScore = score;
      best = { ...found.dynamics, structure, factorLogSdError: found.logSdError, scores };
    }
  }
  if (!best) throw new RangeError('no structure fits: the log score of every candidate is not a number');
  return given.factorVariance === undefined ? { ...best, factorVariance: unbiased(best.factorVariance, hours) } : best;
}

/**
 * The profile was fitted to the same days, and took their seven weekday levels from what varies: n / (n − 7) gives it back, as
 * restricted maximum likelihood does (Patterson & Thompson 1971).
 */
function unbiased(variance: number, hours: number): number {
  const days = hours / 24;
  return variance * (days / Math.max(days - 7, 7));
}

/** The series with its effects multiplied into what is expected. */
function withEffectsKnown(series: BlockSeries, effects: readonly number[]): BlockSeries {
  const expected = series.expected.map((value, k) => value * Math.exp(effectSum(series, k, effects)));
  const none = { index: [], value: [] };
  return { ...series, expected, effects: series.effects.map(() => none) };
}

function findDynamics(
  series: BlockSeries,
  structure: FactorStructure,
  given: Partial<ArrivalSettings>,
  from: readonly number[],
): { dynamics: LevelDynamics; logProbability: number; logSdError: number; x: number[] } {
  const varies = structure !== 'none' && given.factorVariance !== 0;
  const correlated = varies && isAutoregressive(structure);
  const free = [
    given.levelVariancePerDay === undefined,
    varies && given.factorVariance === undefined,
    correlated && given.factorCorrelation === undefined,
    given.spellVariance === undefined,
  ];
  const all = [
    priors.levelVariance.centre,
    priors.factorVariance.centre,
    priors.correlation.centre,
    priors.spellVariance.centre,
  ];
  const dynamicsAt = (x: readonly number[]): LevelDynamics => ({
    levelVariancePerDay: given.levelVariancePerDay ?? clampExp(x[0], -20, -4),
    factorVariance: varies ? (given.factorVariance ?? clampExp(x[1], -14, 0)) : 0,
    factorCorrelation: correlated ? (given.factorCorrelation ?? 0.98 / (1 + Math.exp(-x[2]))) : 0,
    spellVariance: given.spellVariance ?? clampExp(x[3], -16, -2),
    spellCorrelationPerDay,
  });
  const run = (x: readonly number[], scoreHalfLifeDays = Infinity): number => {
    const dynamics = dynamicsAt(x);
    const start = firstState([], dynamics.factorVariance, dynamics.spellVariance);
    return filterLevel(series, dynamics, start, { scoreHalfLifeDays }).logProbability;
  };
  const places = [0, 1, 2, 3].filter((i) => free[i]);
  const spread = (x: readonly number[]): number[] => {
    const full = [...all];
    places.forEach((place, i) => (full[place] = x[i]));
    return full;
  };
  const sds = [priors.levelVariance.sd, priors.factorVariance.sd, priors.correlation.sd, priors.spellVariance.sd];
  const objective = (x: readonly number[]): number =>
    -run(spread(x), memoryDays) +
    places.reduce((sum, place, i) => sum + 0.5 * ((x[i] - all[place]) / sds[place]) ** 2, 0);

  // The last structure's speeds are a good place to begin from; those that it lacked stand at their priors there.
  const warm = from.length > 0;
  const start = places.map((place) => (warm ? from[place] : all[place]));
  const steps = places.map(() => (warm ? 0.6 : -1));
  const found = places.length > 0 ? minimise(objective, start, steps, 15 + 13 * places.length) : { x: [] };
  const x = spread(found.x);
  let logSdError = given.factorLogSdError ?? 0;
  const at = places.indexOf(1);
  if (at >= 0 && given.factorLogSdError === undefined) {
    // Curvature of the objective in log φ: half its standard error is that of the log standard deviation.
    const step = 0.3;
    const moved = (by: number) => objective(found.x.map((v, i) => (i === at ? v + by : v)));
    const curvature = (moved(step) - 2 * moved(0) + moved(-step)) / (step * step);
    logSdError = Math.min(0.75, 0.5 / Math.sqrt(Math.max(curvature, 0.1)));
  }
  return { dynamics: dynamicsAt(x), logProbability: run(x), logSdError, x };
}

function clampExp(value: number, low: number, high: number): number {
  return Math.exp(Math.min(high, Math.max(low, value)));
}
