import { normalCdf } from '../stochastic/normal.ts';
import type { OutflowFactor } from './stay-model.ts';

/** Departures and expected departures by local day, in order; days without either are left out by `gap` between numbers. */
export interface DailyOutflow {
  day: Int32Array;
  departures: Float64Array;
  expected: Float64Array;
}

/**
 * Estimates how the departure hazard varies from day to day. Given the factor f, departures of a day minus f times
 * their compensator (hazard times realised time at risk) is a martingale increment (Aalen 1978), so that with
 * x = departures − expected: Var f = Σ(x² − departures) / Σ expected² with its standard error s, and the lag-one
 * autocovariance is Σ x·x′ / Σ expected·expected′ over neighbouring days. A variance is never below 0: what is returned is
 * the mean and standard deviation of the normal law of estimate and error cut off at 0, so that a log too small to tell
 * does not claim that outflow never varies. The correlation is that of the logarithm of a lognormal factor, held to
 * 0.5 ± 0.3 (common practice, no source: bad days follow one another, not for long) as far as its own error is wide.
 * @returns variance and correlation with standard errors, and the error that the factor leaves in the overall level.
 * Cost: linear in days.
 */
export function estimateOutflow(daily: DailyOutflow): OutflowFactor {
  const { day, departures, expected } = daily;
  const days = day.length;
  let square = 0;
  let weight = 0;
  let cross = 0;
  let crossWeight = 0;
  for (let d = 0; d < days; d += 1) {
    const x = departures[d] - expected[d];
    square += x * x - departures[d];
    weight += expected[d] * expected[d];
    if (d + 1 < days && day[d + 1] === day[d] + 1) {
      cross += x * (departures[d + 1] - expected[d + 1]);
      crossWeight += expected[d] * expected[d + 1];
    }
  }
  const none = { variance: 0, varianceSe: 0, correlation: 0, correlationSe: 0, levelSe: 0, days };
  if (days < 14 || weight === 0) return none;
  const estimate = square / weight;
  const plausible = Math.max(0, estimate);
  let spread = 0;
  for (let d = 0; d < days; d += 1) {
    const x = departures[d] - expected[d];
    const residual = x * x - departures[d] - plausible * expected[d] * expected[d];
    spread += residual * residual;
  }
  const meanExpected = expected.reduce((sum, value) => sum + value, 0) / days;
  const error = Math.sqrt(spread) / weight;
  if (!(error > 0)) return none;
  const covariance = crossWeight > 0 ? cross / crossWeight : 0;
  const first = cutAtZero(estimate, error);
  const correlation = heldCorrelation(covariance, first.mean, meanExpected, days);
  // Days that follow one another tell less of the variance.
  const inflate = (1 + correlation.mean ** 2) / (1 - correlation.mean ** 2);
  const variance = cutAtZero(estimate, error * Math.sqrt(inflate));
  return {
    variance: variance.mean,
    varianceSe: variance.sd,
    correlation: correlation.mean,
    correlationSe: correlation.sd,
    levelSe: Math.sqrt((variance.mean * (1 + correlation.mean)) / (1 - correlation.mean) / days),
    days,
  };
}

/** Mean and standard deviation of a normal law cut off at 0. */
function cutAtZero(mean: number, sd: number): { mean: number; sd: number } {
  const z = mean / sd;
  // Far below 0 the law is exponential with rate −z / sd.
  if (z < -30) return { mean: sd / -z, sd: sd / -z };
  const density = Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI);
  const ratio = density / normalCdf(z);
  return { mean: sd * (z + ratio), sd: sd * Math.sqrt(Math.max(1e-12, 1 - ratio * (ratio + z))) };
}

const usualCorrelation = { mean: 0.5, sd: 0.3 };

function heldCorrelation(
  covariance: number,
  variance: number,
  meanExpected: number,
  days: number,
): { mean: number; sd: number } {
  const found = Math.min(0.97, Math.max(-0.5, Math.log1p(Math.max(-0.5, covariance)) / Math.log1p(variance)));
  // The daily ratio carries Poisson noise 1/expected beside the factor's own variance.
  const reliability = variance / (variance + 1 / meanExpected);
  const error = Math.sqrt((1 - found * found) / days) / reliability;
  const known = 1 / (error * error);
  const before = 1 / usualCorrelation.sd ** 2;
  const mean = (known * found + before * usualCorrelation.mean) / (known + before);
  return { mean: Math.min(0.97, Math.max(0, mean)), sd: Math.sqrt(1 / (known + before)) };
}

/**
 * The most likely factor of every day given all days: Kalman smoother (Rauch, Tung & Striebel 1965) for an AR(1) around 1
 * seen through daily ratios with noise variance 1/expected.
 * @returns one factor a day, mean 1 over the days by weight of nothing but count; never below 0.05. Cost: linear in days.
 */
export function smoothOutflow(daily: DailyOutflow, factor: OutflowFactor): Float64Array {
  const { day, departures, expected } = daily;
  const days = day.length;
  const smooth = new Float64Array(days).fill(1);
  if (factor.variance === 0) return smooth;
  const predicted = new Float64Array(days);
  const predictedVariance = new Float64Array(days);
  const filtered = new Float64Array(days);
  const filteredVariance = new Float64Array(days);
  const carry = new Float64Array(days);
  let mean = 0;
  let variance = factor.variance;
  for (let d = 0; d < days; d += 1) {
    const phi = d === 0 ? 0 : factor.correlation ** Math.max(1, day[d] - day[d - 1]);
    carry[d] = phi;
    mean *= phi;
    variance = factor.variance * (1 - phi * phi) + phi * phi * variance;
    predicted[d] = mean;
    predictedVariance[d] = variance;
    if (expected[d] > 0) {
      const gain = variance / (variance + 1 / expected[d]);
      mean += gain * (departures[d] / expected[d] - 1 - mean);
      variance *= 1 - gain;
    }
    filtered[d] = mean;
    filteredVariance[d] = variance;
  }
  let later = filtered[days - 1];
  smooth[days - 1] = 1 + later;
  for (let d = days - 2; d >= 0; d -= 1) {
    const back = (filteredVariance[d] * carry[d + 1]) / predictedVariance[d + 1];
    later = filtered[d] + back * (later - predicted[d + 1]);
    smooth[d] = 1 + later;
  }
  const average = smooth.reduce((sum, value) => sum + value, 0) / days;
  return smooth.map((value) => Math.max(0.05, value / average));
}
