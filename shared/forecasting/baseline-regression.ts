import { hourOfWeek, hoursOfWeek } from '../domain/hour-of-week.ts';
import type { HourlyCounts } from './arrival-model.ts';
import { isPublicHoliday, type CalendarIndex } from './calendar-effect.ts';
import { choleskyFactor, choleskySolve } from './cholesky.ts';
import { fitDispersion } from './fit-dispersion.ts';

/** Trend, two annual harmonics, public holiday. */
const covariates = 6;

function covariatesOf(index: CalendarIndex, day: number, firstDay: number): number[] {
  const angle = (2 * Math.PI * day) / 365.2425;
  return [
    (day - firstDay) / 365.2425,
    Math.sin(angle),
    Math.cos(angle),
    Math.sin(2 * angle),
    Math.cos(2 * angle),
    isPublicHoliday(index, day) ? 1 : 0,
  ];
}

/**
 * The regression that a good analyst would run: negative binomial with log link, a factor of 168 hours of the week, linear
 * trend, two annual harmonics and a public-holiday term (Hilbe 2011). Exposure is an offset. Maximum likelihood by
 * iteratively reweighted least squares, the dispersion refitted between rounds; the hour factor is eliminated exactly
 * (Schur complement), so the cost is linear in hours.
 * @param training hours used, from the start of the counts; means are given for [0, to)
 * @param start coefficients of an earlier fit to start from
 */
export function regressionMeans(
  counts: HourlyCounts,
  index: CalendarIndex,
  training: number,
  to: number,
  start?: Float64Array,
): { means: Float64Array; coefficients: Float64Array } {
  const { firstLocalHour, exposureHours } = counts;
  const observed = counts.counts[0];
  const firstDay = firstLocalHour / 24;
  const rows = Array.from({ length: Math.ceil(to / 24) }, (_, d) => covariatesOf(index, firstDay + d, firstDay));
  const size = hoursOfWeek + covariates;
  const beta = start ? start.slice() : new Float64Array(size);
  const means = new Float64Array(to);
  if (!start) {
    const count = new Float64Array(hoursOfWeek);
    const exposure = new Float64Array(hoursOfWeek);
    for (let i = 0; i < training; i += 1) {
      count[hourOfWeek(firstLocalHour + i)] += observed[i];
      exposure[hourOfWeek(firstLocalHour + i)] += exposureHours[i];
    }
    for (let h = 0; h < hoursOfWeek; h += 1) beta[h] = Math.log((count[h] + 0.5) / Math.max(exposure[h], 1));
  }
  const predict = (until: number): void => {
    for (let i = 0; i < until; i += 1) {
      const row = rows[Math.floor(i / 24)];
      let eta = beta[hourOfWeek(firstLocalHour + i)];
      for (let c = 0; c < covariates; c += 1) eta += row[c] * beta[hoursOfWeek + c];
      means[i] = exposureHours[i] * Math.exp(eta);
    }
  };
  let phi = 0;
  for (let round = 0; round < 12; round += 1) {
    predict(training);
    if (round === 1) phi = fitDispersion(means.subarray(0, training), observed.subarray(0, training));
    const diagonal = new Float64Array(hoursOfWeek).fill(1e-6);
    const cross = new Float64Array(hoursOfWeek * covariates);
    const block = new Float64Array(covariates * covariates);
    const rightHours = new Float64Array(hoursOfWeek);
    const right = new Float64Array(covariates);
    for (let i = 0; i < training; i += 1) {
      const mean = means[i];
      if (!(mean > 0)) continue;
      const weight = mean / (1 + phi * mean);
      const score = (weight * (observed[i] - mean)) / mean;
      const h = hourOfWeek(firstLocalHour + i);
      const row = rows[Math.floor(i / 24)];
      diagonal[h] += weight;
      rightHours[h] += score;
      for (let c = 0; c < covariates; c += 1) {
        cross[h * covariates + c] += weight * row[c];
        right[c] += score * row[c];
        for (let d = 0; d <= c; d += 1) block[c * covariates + d] += weight * row[c] * row[d];
      }
    }
    for (let h = 0; h < hoursOfWeek; h += 1) {
      for (let c = 0; c < covariates; c += 1) {
        const scaled = cross[h * covariates + c] / diagonal[h];
        right[c] -= scaled * rightHours[h];
        for (let d = 0; d <= c; d += 1) block[c * covariates + d] -= scaled * cross[h * covariates + d];
      }
    }
    // A hint of ridge keeps a covariate that never varied (no holiday yet) at its place.
    for (let c = 0; c < covariates; c += 1) block[c * covariates + c] += 1e-3;
    const step = choleskySolve(choleskyFactor(block, covariates), covariates, right);
    let largest = 0;
    for (let h = 0; h < hoursOfWeek; h += 1) {
      let move = rightHours[h];
      for (let c = 0; c < covariates; c += 1) move -= cross[h * covariates + c] * step[c];
      move = Math.max(-2, Math.min(2, move / diagonal[h]));
      beta[h] += move;
      largest = Math.max(largest, Math.abs(move));
    }
    for (let c = 0; c < covariates; c += 1) {
      beta[hoursOfWeek + c] += step[c];
      largest = Math.max(largest, Math.abs(step[c]));
    }
    if (round > 1 && largest < 1e-6) break;
  }
  predict(to);
  return { means, coefficients: beta };
}
