import { gammaPoissonLogPmf } from '../stochastic/gamma-poisson.ts';
import type { EffectPrior, LevelState } from './arrival-model.ts';
import type { BlockSeries } from './block-series.ts';

/** What moves the level and the factor from block to block. */
export interface LevelDynamics {
  levelVariancePerDay: number;
  factorVariance: number;
  /** Between neighbouring blocks. */
  factorCorrelation: number;
  /** Stationary variance of a spell, and its correlation from day to day. */
  spellVariance: number;
  spellCorrelationPerDay: number;
}

export interface FilterOptions {
  /**
   * 1 − share per block, where the expectation is conditional on the site's total (multinomial); predictions are then
   * scored by the normal density with that variance.
   */
  informationScale?: Float64Array;
  /** The first block is the one that the start already stands in (its hours were counted in part). */
  sameBlock?: boolean;
  /** Days after which a block's score weighs half in the sum; all alike by default. */
  scoreHalfLifeDays?: number;
}

export interface FilterResult {
  state: LevelState;
  /** Sum of the log probabilities of the blocks, each given all before it (lower is worse). */
  logProbability: number;
  blocks: number;
}

/** Spread of the log level before any data; the profile already carries the average level. */
const firstLevelSd = 0.5;

/** Where the effects begin in a state, after level, factor and spell. */
export const firstEffect = 3;

/** Belief before any data. */
export function firstState(
  effects: readonly EffectPrior[],
  factorVariance: number,
  spellVariance: number,
  levelSd = firstLevelSd,
): LevelState {
  const size = firstEffect + effects.length;
  const covariance = new Array<number>(size * size).fill(0);
  covariance[0] = levelSd ** 2;
  covariance[size + 1] = factorVariance;
  covariance[2 * size + 2] = spellVariance;
  effects.forEach(({ sd }, i) => {
    covariance[(firstEffect + i) * (size + 1)] = sd ** 2;
  });
  return { mean: [0, 0, 0, ...effects.map(({ mean }) => mean)], covariance };
}

/**
 * Filters [log level, factor, spell, effects…] through counts by block.
 *
 * y_k ~ Poisson(e_k exp(L_k + u_k + s_k + x_k·c)); L is a random walk, u and s are AR(1) with mean 0, from block to block
 * and from day to day, c is constant. Each update takes the
 * mode of the posterior along the line that the count speaks of and the curvature there (Laplace's approximation, the mean by its
 * next term; West &
 * Harrison 1997, section 14.3, gives the family of such filters for dynamic generalised linear models). Predictions are
 * scored as gamma–Poisson with the variance of the log predictor.
 *
 * @param start belief just before the first block, for the state after the block before it
 * Cost: blocks × (3 + effects)².
 */
export function filterLevel(
  series: BlockSeries,
  dynamics: LevelDynamics,
  start: LevelState,
  { informationScale, sameBlock = false, scoreHalfLifeDays = Infinity }: FilterOptions = {},
): FilterResult {
  const keep = 2 ** (-series.daysPerBlock / scoreHalfLifeDays);
  const size = start.mean.length;
  const mean = Float64Array.from(start.mean);
  const p = Float64Array.from(start.covariance);
  const ph = new Float64Array(size);
  const drift = dynamics.levelVariancePerDay * series.daysPerBlock;
  const rho = dynamics.factorCorrelation;
  const fresh = (1 - rho * rho) * dynamics.factorVariance;
  const spellRho = dynamics.spellCorrelationPerDay ** series.daysPerBlock;
  const spellFresh = (1 - spellRho * spellRho) * dynamics.spellVariance;
  let logProbability = 0;
  let blocks = 0;
  for (let k = 0; k < series.expected.length; k += 1) {
    if (k > 0 || !sameBlock) {
      p[0] += drift;
      mean[1] *= rho;
      mean[2] *= spellRho;
      for (let j = 0; j < size; j += 1) {
        p[size + j] *= rho;
        p[j * size + 1] *= rho;
        p[2 * size + j] *= spellRho;
        p[j * size + 2] *= spellRho;
      }
      p[size + 1] += fresh;
      p[2 * size + 2] += spellFresh;
    }
    const expected = series.expected[k];
    if (!(expected > 0)) continue;

    const { index, value } = series.effects[k];
    let eta = mean[0] + mean[1] + mean[2];
    for (let j = 0; j < index.length; j += 1) eta += value[j] * mean[firstEffect + index[j]];
    for (let i = 0; i < size; i += 1) {
      let sum = p[i * size] + p[i * size + 1] + p[i * size + 2];
      for (let j = 0; j < index.length; j += 1) sum += value[j] * p[i * size + firstEffect + index[j]];
      ph[i] = sum;
    }
    let variance = ph[0] + ph[1] + ph[2];
    for (let j = 0; j < index.length; j += 1) variance += value[j] * ph[firstEffect + index[j]];
    if (variance < 0) variance = 0;

    const observed = series.observed[k];
    const predicted = expected * Math.exp(eta + variance / 2);
    const scale = informationScale ? informationScale[k] : 1;
    if (informationScale) {
      const spread = predicted * scale + predicted * predicted * variance + 1e-9;
      const gap = observed - predicted;
      logProbability = keep * logProbability - 0.5 * (Math.log(2 * Math.PI * spread) + (gap * gap) / spread);
    } else {
      logProbability = keep * logProbability + gammaPoissonLogPmf(observed, predicted, Math.expm1(variance));
    }
    blocks += 1;
    if (variance === 0) continue;

    // Mode of scale⁻¹(y η − e exp η) − (η − η₀)² / 2V by Newton's method from the prior mean.
    let at = eta;
    for (let step = 0; step < 8; step += 1) {
      const rate = expected * Math.exp(at);
      const gradient = (observed - rate) / scale - (at - eta) / variance;
      const move = gradient / (rate / scale + 1 / variance);
      at += Math.max(-1, Math.min(1, move));
      if (Math.abs(move) < 1e-7) break;
    }
    const information = (expected * Math.exp(at)) / scale;
    const noise = 1 / information;
    // The posterior leans to the left of its mode; half the third derivative moves the mode to the mean.
    const narrowed = variance / (1 + variance * information);
    at -= 0.5 * information * narrowed * narrowed;
    const gain = 1 / (variance + noise);
    const shift = (at - eta) / variance;
    for (let i = 0; i < size; i += 1) {
      mean[i] += ph[i] * shift;
      const scaled = gain * ph[i];
      for (let j = 0; j < size; j += 1) p[i * size + j] -= scaled * ph[j];
    }
  }
  return { state: { mean: Array.from(mean), covariance: Array.from(p) }, logProbability, blocks };
}

/**
 * Smoothed log level of every block, given the effects: forwards filter, then Rauch, Tung & Striebel's (1965) backward
 * pass; the factor counts as independent noise. For the profile's exposure and the moments of the factors.
 */
export function smoothLevel(
  series: BlockSeries,
  dynamics: LevelDynamics,
  effects: readonly number[],
  informationScale?: Float64Array,
): Float64Array {
  const count = series.expected.length;
  const mean = new Float64Array(count);
  const variance = new Float64Array(count);
  const drift = dynamics.levelVariancePerDay * series.daysPerBlock + 1e-12;
  let m = 0;
  let v = firstLevelSd ** 2;
  for (let k = 0; k < count; k += 1) {
    v += drift;
    const offset = series.expected[k] * Math.exp(effectSum(series, k, effects));
    if (offset > 0) {
      const rate = offset * Math.exp(m);
      const scale = informationScale ? informationScale[k] : 1;
      const noise = scale / rate + dynamics.factorVariance;
      // A block that triples says no more of the level than one that doubles.
      const gap = Math.min(1, (series.observed[k] - rate) / rate);
      const gain = v / (v + noise);
      m += gain * gap;
      v *= 1 - gain;
    }
    mean[k] = m;
    variance[k] = v;
  }
  for (let k = count - 2; k >= 0; k -= 1) {
    const gain = variance[k] / (variance[k] + drift);
    mean[k] += gain * (mean[k + 1] - mean[k]);
  }
  return mean;
}

/** Σ x·c of a block. */
export function effectSum(series: BlockSeries, block: number, effects: readonly number[]): number {
  const { index, value } = series.effects[block];
  let sum = 0;
  for (let j = 0; j < index.length; j += 1) sum += value[j] * effects[index[j]];
  return sum;
}
