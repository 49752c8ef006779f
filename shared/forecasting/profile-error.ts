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

/**
 * The error of the profile at the given hours of week, for drawing: covariance w_h w_g (B V Bᵀ)_hg + own_h² δ_hg, with w
 * the weight of the smooth profile. The smooth part is cut to the few pivots (pivoted Cholesky; Higham 2002, section
 * 10.3) that leave less than a fifth of any hour's variance, which is then counted as the hour's own.
 * Cost: hours² × basis once.
 */
export function profileError(profile: WeeklyProfile, hours: readonly number[], coarse: boolean): ProfileError {
  const n = hours.length;
  const size = profile.basisSize;
  const { rows } = weeklyBasis(coarse);
  const half = new Float64Array(n * size);
  hours.forEach((hour, i) => {
    for (let j = 0; j < size; j += 1) {
      let sum = 0;
      for (let k = j; k < size; k += 1) sum += rows[hour * size + k] * profile.basisFactor[k * size + j];
      half[i * size + j] = profile.smoothWeight[hour] * sum;
    }
  });
  const dot = (i: number, j: number): number => {
    let sum = 0;
    for (let k = 0; k < size; k += 1) sum += half[i * size + k] * half[j * size + k];
    return sum;
  };
  const left = Float64Array.from(hours, (_, i) => dot(i, i));
  const variance = Float64Array.from(hours, (hour, i) => left[i] + profile.logSd[hour] ** 2);
  // An hour that is known exactly has nothing left to explain.
  const shareLeft = (i: number): number => (variance[i] > 0 ? left[i] / variance[i] : 0);
  const columns: Float64Array[] = [];
  while (columns.length < Math.min(n, size)) {
    let pivot = 0;
    for (let i = 1; i < n; i += 1) if (shareLeft(i) > shareLeft(pivot)) pivot = i;
    if (left[pivot] < 0.2 * variance[pivot]) break;
    const root = Math.sqrt(left[pivot]);
    const column = new Float64Array(n);
    for (let i = 0; i < n; i += 1) {
      let value = dot(i, pivot);
      for (const earlier of columns) value -= earlier[i] * earlier[pivot];
      column[i] = value / root;
      left[i] = Math.max(0, left[i] - column[i] * column[i]);
    }
    left[pivot] = 0;
    columns.push(column);
  }
  const rank = columns.length;
  const common = new Float64Array(n * rank);
  columns.forEach((column, r) => column.forEach((value, i) => (common[i * rank + r] = value)));
  const ownSd = Float64Array.from(hours, (hour, i) => Math.sqrt(left[i] + profile.logSd[hour] ** 2));
  return { rank, common, ownSd, variance };
}
