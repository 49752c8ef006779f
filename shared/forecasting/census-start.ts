import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { StayModel, StayShape } from './stay-model.ts';
import { hazardAt } from './stay-shape.ts';

/** The past of one area as the model has it, oldest first: what the patients present now came from. */
export interface ModelledPast {
  /** Segment lengths, hours; the last one ends at the census. */
  hours: Float64Array;
  /** Arrivals an hour by stream, [stream][segment]; the boarding stream has none. */
  ratePerHour: Float64Array[];
  /** Departure hazard by stream, [stream][segment]. */
  hazardPerHour: Float64Array[];
}

/** Who is present by the model: mean by stream, and the law of what remains of their stays, in means of the stream. */
export interface ExpectedPresent {
  means: number[];
  /** Null: exponential, which has no memory. */
  remaining: (StayShape | null)[];
}

/**
 * The model's expected patients present by stream, ∫ λ(t − a)·S(a) da over the modelled past, S the stay's survival in
 * operational time; with a shape, also the law of the remaining stay given that the patient is still there,
 * P(R > r) = ∫ λ(t − a)·S(A(a) + r) da / ∫ λ(t − a)·S(A(a)) da. Cost: past segments × 80 a stream with a shape.
 */
export function expectedPresent(past: ModelledPast, shapes: readonly (StayShape | null)[]): ExpectedPresent {
  const means: number[] = [];
  const remaining: (StayShape | null)[] = [];
  const count = past.hours.length;
  for (let s = 0; s < past.ratePerHour.length; s += 1) {
    const shape = shapes[s];
    const rate = past.ratePerHour[s];
    const hazard = past.hazardPerHour[s];
    if (shape === null) {
      let mean = 0;
      for (let k = 0; k < count; k += 1) {
        const spent = hazard[k] * past.hours[k];
        const filled = hazard[k] > 1e-9 ? -Math.expm1(-spent) / hazard[k] : past.hours[k];
        mean = mean * Math.exp(-spent) + rate[k] * filled;
      }
      means.push(mean);
      remaining.push(null);
      continue;
    }
    // Operational age of those who arrived in each half of each segment.
    const ages: number[] = [];
    const weights: number[] = [];
    let age = 0;
    for (let k = count - 1; k >= 0; k -= 1) {
      const spent = hazard[k] * past.hours[k];
      for (const share of [0.25, 0.75]) {
        ages.push(age + share * spent);
        weights.push((rate[k] * past.hours[k]) / 2);
      }
      age += spent;
    }
    const survivors = (extra: number): number => {
      let sum = 0;
      for (let i = 0; i < ages.length; i += 1) {
        if (weights[i] > 0) sum += weights[i] * Math.exp(-hazardAt(shape, ages[i] + extra));
      }
      return sum;
    };
    const mean = survivors(0);
    means.push(mean);
    // Nobody is modelled to come into boarding: what remains of it has no age to go by.
    remaining.push(mean > 0 ? remainingShape(survivors, mean, shape.tail) : null);
  }
  return { means, remaining };
}

const remainingStep = 1 / 8;
const remainingEntries = 48;

function remainingShape(survivors: (extra: number) => number, mean: number, tail: number): StayShape {
  // Survival on an even grid of remaining stays, then turned round to even steps of cumulative hazard.
  const width = 0.1;
  const stays = [0];
  let before = 0;
  for (let i = 1; i < 80 && stays.length < remainingEntries; i += 1) {
    const now = -Math.log(Math.max(survivors(i * width) / mean, 1e-12));
    while (stays.length * remainingStep <= now && stays.length < remainingEntries) {
      const within = now > before ? (stays.length * remainingStep - before) / (now - before) : 0;
      stays.push((i - 1 + within) * width);
    }
    before = now;
  }
  return { step: remainingStep, stays, tail };
}

/**
 * Chances of each of an area's streams for a patient who is present and not boarding: the model's expected present by
 * stream; of the admitted those before the decision: where it is no stage of its own, the share that decision times tell.
 */
export function sharesNotBoarding(
  stay: StayModel & { staged?: readonly boolean[] },
  area: number,
  means: readonly number[],
): number[] {
  const weights = means.slice(0, boardingStream);
  if (stay.staged?.[area] !== true) weights[admittedStream] *= stay.shareBeforeDecision[area] ?? 1;
  let total = weights.reduce((sum, value) => sum + value, 0);
  if (!(total > 0)) {
    const { alpha } = stay.shares[area];
    weights.forEach((_, d) => {
      weights[d] = alpha.reduce((sum, block) => sum + block[d], 0);
    });
    total = weights.reduce((sum, value) => sum + value, 0);
  }
  return [...weights.map((value) => value / total), 0];
}

/** The stream whose hazard boarding patients leave by: their own where decision times are loaded, else the admitted stream. */
export function streamOfBoarders(stay: StayModel, area: number): number {
  const own = stay.streams[area * streamsPerArea + boardingStream];
  return own.departures > 0 ? boardingStream : admittedStream;
}

/** Mean patients of a stream at the end of each segment, newcomers only, under a shape: ∫ λ(u)·S(A(u, t)) du. */
export function newcomersUnderShape(
  hours: ArrayLike<number>,
  rate: ArrayLike<number>,
  hazard: ArrayLike<number>,
  shape: StayShape | null,
): Float64Array {
  const count = hours.length;
  const means = new Float64Array(count);
  for (let from = 0; from < count; from += 1) {
    if (!(rate[from] > 0)) continue;
    for (const share of [0.25, 0.75]) {
      let age = -share * hazard[from] * hours[from];
      for (let k = from; k < count; k += 1) {
        age += hazard[k] * hours[k];
        const alive = Math.exp(-hazardAt(shape, age));
        if (alive < 1e-9) break;
        means[k] += (rate[from] * hours[from] * alive) / 2;
      }
    }
  }
  return means;
}

/** The chance that a remaining stay outlasts an operational time. */
export function survivalOf(shape: StayShape | null, time: number): number {
  return Math.exp(-hazardAt(shape, time));
}
