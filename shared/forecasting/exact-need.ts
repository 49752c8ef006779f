import type { Pmf } from '../stochastic/convolve.ts';
import {
  addSum,
  binomialLaw,
  lengthOfSum,
  makeLawRoom,
  putBinomial,
  putGammaPoisson,
  putLaw,
  sumOfLaws,
} from './count-law.ts';
import type { CountLaw, LawRoom } from './count-law.ts';
import type { FactorNode } from './factor-nodes.ts';

/** One stream of an area: arrivals an hour and departure hazard an hour, constant within each segment. */
export interface NeedStream {
  ratePerHour: ArrayLike<number>;
  hazardPerHour: ArrayLike<number>;
  /** Where a stay has a second stage: the hazard of leaving from it, when `hazardPerHour` is that of passing into it. */
  thenHazardPerHour?: ArrayLike<number>;
}

/** Patients counted at the start, each of them in stream s with chance `shares[s]`, on their own; what is missing to 1 is elsewhere. */
export interface PresentGroup {
  patients: number;
  shares: readonly number[];
}

/** What an area's exact need is made of. */
export interface ExactNeedInput {
  /** Segment lengths, hours. */
  hours: ArrayLike<number>;
  streams: readonly NeedStream[];
  /** Those counted at the start of the first segment. */
  present: readonly PresentGroup[];
  /** Where nobody was counted: the mean number present by stream (Poisson), which the arrival factor multiplies too. */
  startMeans?: readonly number[];
  /** Variance of a gamma factor of mean 1 on all arrival rates, constant over the horizon; 0 by default. Integrated in closed form. */
  arrivalVariance?: number;
  /** Factor on all hazards, constant over the horizon; one node of 1 by default. */
  outflowFactor?: readonly FactorNode[];
  /** Only the end of the last segment is wanted. */
  onlyLast?: boolean;
}

const one: readonly FactorNode[] = [{ value: 1, weight: 1 }];

function check(input: ExactNeedInput): void {
  const { hours, streams, present, arrivalVariance = 0 } = input;
  if (!(arrivalVariance >= 0 && arrivalVariance < 1e3)) throw new RangeError(`arrivalVariance is ${arrivalVariance}`);
  for (let k = 0; k < hours.length; k += 1) {
    if (!(hours[k] >= 0 && hours[k] < Infinity)) throw new RangeError(`hours[${k}] must be 0 or more, got ${hours[k]}`);
    streams.forEach((stream, s) => {
      const rate = stream.ratePerHour[k];
      const hazard = stream.hazardPerHour[k];
      if (!(rate >= 0 && rate < 1e6)) throw new RangeError(`streams[${s}].ratePerHour[${k}] is ${rate}`);
      if (!(hazard >= 0 && hazard < Infinity)) throw new RangeError(`streams[${s}].hazardPerHour[${k}] is ${hazard}`);
    });
  }
  present.forEach((group, g) => {
    if (!Number.isInteger(group.patients) || group.patients < 0 || group.patients > 1e5) {
      throw new RangeError(`present[${g}].patients must be a count, got ${group.patients}`);
    }
    const sum = group.shares.reduce((a, b) => a + b, 0);
    if (group.shares.length !== streams.length || !(sum >= 0 && sum < 1 + 1e-9)) {
      throw new RangeError(`present[${g}].shares must be one a stream and sum to 1 at most`);
    }
  });
}

/**
 * The exact distribution of need at the end of every segment: M_t/M_t/∞ with several streams (Eick, Massey & Whitt
 * 1993). Those present survive as Binomial(n, Σ shares · e^{−∫μ}), through a second stage where a stream has one; newcomers are Poisson with mean m, m′ = λ − μ·m,
 * in closed form within a segment, gamma–Poisson with a gamma arrival factor; the outflow factor is integrated out by
 * quadrature over the nodes given.
 * @returns one distribution a segment, at its end. @throws RangeError naming a bad rate, hazard, count or share.
 * Cost: 6 areas × 168 segments × 4 streams with 3 outflow nodes in under 10 ms.
 */
export function exactNeed(input: ExactNeedInput): Pmf[] {
  check(input);
  const { hours, streams, present, startMeans } = input;
  const arrivalVariance = input.arrivalVariance ?? 0;
  const outflowNodes = input.outflowFactor ?? one;
  const count = hours.length;
  // Newcomers' mean at factor 1 and the groups' survival, by outflow node and segment.
  const means = outflowNodes.map(() => new Float64Array(count));
  const survivals = outflowNodes.map(() => present.map(() => new Float64Array(count)));
  outflowNodes.forEach((node, o) => {
    streams.forEach((stream, s) => {
      let mean = startMeans?.[s] ?? 0;
      let alive = 1;
      const then = stream.thenHazardPerHour;
      let meanThen = 0;
      let aliveThen = 0;
      for (let k = 0; k < count; k += 1) {
        const hazard = stream.hazardPerHour[k] * node.value;
        const stay = Math.exp(-hazard * hours[k]);
        const filled = hazard > 1e-9 ? -Math.expm1(-hazard * hours[k]) / hazard : hours[k];
        if (then !== undefined) {
          const leave = then[k] * node.value;
          const stayThen = Math.exp(-leave * hours[k]);
          // Second stage after a unit in the first at the segment's start, and after a unit an hour of arrivals.
          const passed = passedOn(hazard, leave, hours[k]);
          const filledThen = leave > 1e-9 ? -Math.expm1(-leave * hours[k]) / leave : hours[k];
          const arrived = hazard > 1e-9 ? filledThen - passed / hazard : 0;
          meanThen = meanThen * stayThen + mean * passed + stream.ratePerHour[k] * arrived;
          aliveThen = aliveThen * stayThen + alive * passed;
        }
        mean = stream.ratePerHour[k] * filled + mean * stay;
        alive *= stay;
        means[o][k] += mean + meanThen;
        for (let g = 0; g < present.length; g += 1) survivals[o][g][k] += present[g].shares[s] * (alive + aliveThen);
      }
    });
  });
  const wanted = input.onlyLast === true ? [count - 1] : Array.from({ length: count }, (_, k) => k);
  const counted = present.map((group, g) => ({ patients: group.patients, g })).filter(({ patients }) => patients > 0);
  const left = lawRooms(outflowNodes.length);
  const newcomers = lawRooms(outflowNodes.length);
  return wanted.map((k) => {
    let length = 0;
    outflowNodes.forEach((_, o) => {
      putSurvivors(left[o], counted, (g) => survivals[o][g][k]);
      putGammaPoisson(newcomers[o], means[o][k], arrivalVariance);
      length = Math.max(length, lengthOfSum(left[o], newcomers[o]));
    });
    const chances = new Float64Array(length);
    outflowNodes.forEach((node, o) => {
      addSum(chances, node.weight, left[o], newcomers[o]);
    });
    return chances;
  });
}

/** Chance to be in the second stage after a time, from the first: a·(e^{−at} − e^{−bt}) / (b − a). @param a, b hazards of passing on and of leaving */
function passedOn(a: number, b: number, t: number): number {
  const difference = (b - a) * t;
  const ratio = Math.abs(difference) > 1e-9 ? -Math.expm1(-difference) / difference : 1;
  return a * t * Math.exp(-a * t) * ratio;
}

function lawRooms(count: number): LawRoom[] {
  return Array.from({ length: count }, makeLawRoom);
}

/** Puts the law of how many of those counted are left into a room. */
function putSurvivors(
  room: LawRoom,
  counted: readonly { patients: number; g: number }[],
  survival: (g: number) => number,
): void {
  if (counted.length < 2) {
    const only = counted.at(0);
    putBinomial(room, only?.patients ?? 0, only ? survival(only.g) : 0);
    return;
  }
  putLaw(
    room,
    counted
      .map(({ patients, g }): CountLaw => binomialLaw(patients, survival(g)))
      .reduce((all, own) => sumOfLaws(all, own)),
  );
}
