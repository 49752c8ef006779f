import { gammaPoissonForecast } from '../../shared/forecasting/count-forecast.ts';
import type { WatchedScore, WatchedSeries } from '../../shared/forecasting/drift-watch.ts';
import { pitStretch } from '../../shared/forecasting/scoring.ts';
import { drawGamma } from '../../shared/stochastic/gamma.ts';
import { drawNormal } from '../../shared/stochastic/normal.ts';
import { drawPoisson } from '../../shared/stochastic/poisson.ts';
import { makeStream, type RandomStream } from '../../shared/stochastic/random.ts';

/** Mean present at 260 visits a day; other sites in proportion. */
const presentPerDailyVisit = 55 / 260;
const weekdays = [1.12, 1.02, 0.98, 0.97, 0.98, 0.97, 0.96];
/** Day-to-day variation of arrivals, and of how many are present for how many came: standard deviation of the log, and its lag-1 correlation. */
const arrivals = { sd: 0.05, correlation: 0.4 };
const outflow = { sd: 0.08, correlation: 0.7 };

export interface SiteYear {
  visitsPerDay: number;
  weeks: number;
  seed: number;
  /** Days from one log to the next: how old the newest day is that a forecast knows. */
  daysPerLog: number;
  /** From this day on arrivals are a factor of what they were. */
  shift?: { fromDay: number; factor: number };
  /** From this day on the truth's standard deviation is a multiple of the forecasts': 1.25 makes intervals 20 % too narrow. */
  narrow?: { fromDay: number; sdRatio: number };
}

/**
 * Scores of a site-year whose truth is known: daily arrivals are Poisson with an AR(1) factor, forecast a day ahead by a filter
 * that knows every parameter and the logs so far; need three times a day follows arrivals with an AR(1) of its own, forecast by
 * its marginal law. Without a shift and with `narrow` unset the forecasts are right up to the filter's normal approximation.
 */
export function simulateSiteYear(year: SiteYear): WatchedSeries[] {
  const stream = makeStream(year.seed, 29);
  const daily: WatchedScore[] = [];
  const need: WatchedScore[] = [];
  const process = arFilter(year);
  let [factor, pace] = [arrivals.sd * drawNormal(stream), outflow.sd * drawNormal(stream)];
  for (let day = 0; day < year.weeks * 7; day += 1) {
    const week = Math.floor(day / 7);
    const change = year.shift && day >= year.shift.fromDay ? year.shift.factor : 1;
    const sdRatio = year.narrow && day >= year.narrow.fromDay ? year.narrow.sdRatio : 1;
    factor = next(stream, factor, arrivals);
    const ordinary = year.visitsPerDay * weekdays[day % 7];
    const { mean, variance } = process.forecast();
    const forecast = { mean: ordinary * Math.exp(mean + variance / 2), phi: Math.expm1(variance) };
    // What the filter does not know of the factor is drawn wider where intervals are to be too narrow.
    const rate = ordinary * change * Math.exp(factor);
    const count =
      sdRatio === 1 ? drawPoisson(stream, rate) : drawWider(stream, forecast.mean * change, forecast.phi, sdRatio);
    daily.push(scored(stream, forecast, count, week));
    process.learn(day, Math.log(Math.max(1, count) / ordinary), 1 / ordinary);
    for (let third = 0; third < 3; third += 1) {
      pace = next(stream, pace, outflow);
      const there = ordinary * presentPerDailyVisit;
      const spreadOf = Math.expm1(outflow.sd ** 2 + arrivals.sd ** 2);
      const law = { mean: there * Math.exp((outflow.sd ** 2 + arrivals.sd ** 2) / 2), phi: spreadOf };
      const present =
        sdRatio === 1
          ? drawPoisson(stream, there * change * Math.exp(factor + pace))
          : drawWider(stream, law.mean * change, law.phi, sdRatio);
      need.push(scored(stream, law, present, week));
    }
  }
  return [
    { name: 'arrivals', scores: daily },
    { name: 'need', scores: need },
  ];
}

function next(stream: RandomStream, value: number, { sd, correlation }: typeof arrivals): number {
  return correlation * value + sd * Math.sqrt(1 - correlation ** 2) * drawNormal(stream);
}

/** A gamma–Poisson count whose standard deviation is a multiple of that of (mean, φ). */
function drawWider(stream: RandomStream, mean: number, phi: number, sdRatio: number): number {
  const wider = (sdRatio ** 2 * (mean + phi * mean * mean) - mean) / (mean * mean);
  return drawPoisson(stream, mean * wider * drawGamma(stream, 1 / wider));
}

function scored(
  stream: RandomStream,
  law: { mean: number; phi: number },
  observed: number,
  week: number,
): WatchedScore {
  const forecast = gammaPoissonForecast(law.mean, law.phi);
  const { lower, upper } = pitStretch(forecast, observed);
  return { week, pit: lower + stream.uniform() * (upper - lower), observed, median: law.mean };
}

/** Kalman filter of the log factor; it learns a day once a log tells of it. */
function arFilter({ daysPerLog }: SiteYear) {
  const { sd, correlation } = arrivals;
  const waiting: { value: number; noise: number }[] = [];
  let known = { mean: 0, variance: sd ** 2 };
  const ahead = (from: typeof known): typeof known => ({
    mean: correlation * from.mean,
    variance: correlation ** 2 * from.variance + (1 - correlation ** 2) * sd ** 2,
  });
  return {
    /** Of the day after those learnt and waiting. */
    forecast(): { mean: number; variance: number } {
      return waiting.reduce((at) => ahead(at), ahead(known));
    },
    learn(day: number, value: number, noise: number): void {
      waiting.push({ value, noise });
      if ((day + 1) % daysPerLog !== 0) return;
      for (const told of waiting.splice(0)) {
        const prior = ahead(known);
        const gain = prior.variance / (prior.variance + told.noise);
        known = {
          mean: prior.mean + gain * (told.value - prior.mean),
          variance: (1 - gain) * prior.variance,
        };
      }
    },
  };
}
