import { checkCount, checkLevel, checkPositive } from './check.ts';
import { gammaQuantile } from './gamma.ts';

/** An exponential law fitted to right-censored times. */
export interface CensoredExponentialFit {
  /** Events per unit of time at risk: the maximum-likelihood estimate. */
  rate: number;
  /** 1 / rate; ∞ when no event was seen. */
  mean: number;
  /** Limits for the rate when the time at risk was fixed beforehand (Garwood): at least the level stated. */
  lower: number;
  upper: number;
  /** Upper limit when watching stopped at the last event (type II censoring), exact there; the lower limit is the same. 0 without events. */
  upperTypeTwo: number;
  /** ln likelihood at the estimate: d ln(rate) − d. */
  logLikelihood: number;
}

/**
 * The rate of an exponential law from right-censored times: events / time at risk, with χ² limits.
 * With d events in time T and α = 1 − level: lower χ²(α/2; 2d) / 2T; upper χ²(1 − α/2; 2d + 2) / 2T, or with 2d
 * degrees of freedom when the end of watching was itself an event (Lawless 2003, Statistical Models and Methods for
 * Lifetime Data, 4.1).
 * @throws RangeError naming the bad argument.
 */
export function fitCensoredExponential(events: number, timeAtRisk: number, level: number): CensoredExponentialFit {
  checkCount('events', events);
  checkPositive('timeAtRisk', timeAtRisk);
  checkLevel('level', level);
  const tail = (1 - level) / 2;
  const rate = events / timeAtRisk;
  return {
    rate,
    mean: timeAtRisk / events,
    lower: events === 0 ? 0 : gammaQuantile(tail, events) / timeAtRisk,
    upper: gammaQuantile(1 - tail, events + 1) / timeAtRisk,
    upperTypeTwo: events === 0 ? 0 : gammaQuantile(1 - tail, events) / timeAtRisk,
    logLikelihood: events === 0 ? 0 : events * Math.log(rate) - events,
  };
}
