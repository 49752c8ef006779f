import type { WeeklyProfile } from './arrival-model.ts';
import { weeklyBasis } from './weekly-basis.ts';

/** Estimation error of a profile's log rates at some hours: a few common terms and a part of each hour's own. */
export interface ProfileError {
  rank: number;
  /** hours × rank, row-major. */
  common: Float64Array;
  ownSd: Float64Array;
  /** Whole variance of each hour's log rate. */
  variance: Float64Array;
}

/** Common terms kept, and sweeps that find them. */
const mostTerms = 6;
const sweeps = 12;

/**
 * The error of the profile at the given hours of week, for drawing: covariance w_h w_g (B V Bᵀ)_hg + own_h² δ_hg, with w
 * the weight of the smooth profile. The smooth part is cut to its six largest principal components (subspace iteration;
 * Golub & Van Loan 2013, section 8.2.4): they hold what hours have in common, and with it the error of a day's sum; what
 * is left of an hour's variance counts as the hour's own, so that each hour keeps its whole variance.
 * Cost: hours × basis × 150, once.
 */
export function profileError(profile: WeeklyProfile, hours: readonly number[], coarse: boolean): ProfileError {
  const n = hours.length;
  const size = profile.basisSize;
  const { rows } = weeklyBasis(coarse);
  const half = new Float64Array(n * size);
  const left = new Float64Array(n);
  hours.forEach((hour, i) => {
    for (let j = 0; j < size; j += 1) {
      let sum = 0;
      for (let k = j; k < size; k += 1) sum += rows[hour * size + k] * profile.basisFactor[k * size + j];
      half[i * size + j] = profile.smoothWeight[hour] * sum;
      left[i] += half[i * size + j] ** 2;
    }
  });
  const variance = Float64Array.from(hours, (hour, i) => left[i] + profile.logSd[hour] ** 2);

  const rank = Math.min(mostTerms, n, size);
  // Cosines of rising frequency: the first is the mean, and none is orthogonal to what is looked for.
  const terms = Array.from({ length: rank }, (_, r) =>
    Float64Array.from(hours, (__, i) => Math.cos((Math.PI * r * (i + 0.5)) / n)),
  );
  const lengths = new Float64Array(rank);
  for (let sweep = 0; sweep < sweeps; sweep += 1) {
    terms.forEach((term, r) => {
      if (sweep > 0) term.set(applyCovariance(half, n, size, term));
      for (let q = 0; q < r; q += 1) {
        const overlap = dot(term, terms[q]);
        for (let i = 0; i < n; i += 1) term[i] -= overlap * terms[q][i];
      }
      lengths[r] = Math.sqrt(dot(term, term));
      for (let i = 0; i < n; i += 1) term[i] = lengths[r] > 0 ? term[i] / lengths[r] : 0;
    });
  }
  const common = new Float64Array(n * rank);
  terms.forEach((term, r) => {
    const scale = Math.sqrt(lengths[r]);
    for (let i = 0; i < n; i += 1) {
      const value = scale * term[i];
      common[i * rank + r] = value;
      left[i] = Math.max(0, left[i] - value * value);
    }
  });
  const ownSd = Float64Array.from(hours, (hour, i) => Math.sqrt(left[i] + profile.logSd[hour] ** 2));
  return { rank, common, ownSd, variance };
}

/** (H Hᵀ) v for the rows H of the smooth part. */
function applyCovariance(half: Float64Array, n: number, size: number, v: Float64Array): Float64Array {
  const inner = new Float64Array(size);
  for (let i = 0; i < n; i += 1) for (let j = 0; j < size; j += 1) inner[j] += half[i * size + j] * v[i];
  const out = new Float64Array(n);
  for (let i = 0; i < n; i += 1) for (let j = 0; j < size; j += 1) out[i] += half[i * size + j] * inner[j];
  return out;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i += 1) sum += a[i] * b[i];
  return sum;
}
