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
 * x = departures − expected: Var f = Σ(x² − departures) / Σ expected², and the lag-one autocovariance is
 * Σ x·x′ / Σ expected·expected′ over neighbouring days. The correlation is that of the logarithm of a lognormal factor.
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
  const variance = Math.max(0, square / weight);
  let spread = 0;
  for (let d = 0; d < days; d += 1) {
    const x = departures[d] - expected[d];
    const residual = x * x - departures[d] - variance * expected[d] * expected[d];
    spread += residual * residual;
  }
  const meanExpected = expected.reduce((sum, value) => sum + value, 0) / days;
  if (variance === 0) return { ...none, varianceSe: Math.sqrt(spread) / weight };
  const covariance = crossWeight > 0 ? cross / crossWeight : 0;
  const logVariance = Math.log1p(variance);
  const correlation = Math.min(0.97, Math.max(0, Math.log1p(Math.max(0, covariance)) / logVariance));
  const inflate = (1 + correlation * correlation) / (1 - correlation * correlation);
  // The daily ratio carries Poisson noise 1/expected beside the factor's own variance.
  const reliability = variance / (variance + 1 / meanExpected);
  return {
    variance,
    varianceSe: (Math.sqrt(spread) / weight) * Math.sqrt(inflate),
    correlation,
    correlationSe: Math.min(0.5, Math.sqrt((1 - correlation * correlation) / days) / reliability),
    levelSe: Math.sqrt((variance * (1 + correlation)) / (1 - correlation) / days),
    days,
  };
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
