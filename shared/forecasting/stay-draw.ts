import type { RandomStream } from '../stochastic/random.ts';
import { makeStayErrors } from './stay-errors.ts';
import { blockHazards, expectedShares } from './stay-model.ts';
import type { StayModel } from './stay-model.ts';

/** Where the segments of a horizon lie: block of the day, block for the shares, and day of the outflow factor, 0, 1, … */
export interface StaySegments {
  block: Uint8Array;
  shareBlock: Uint8Array;
  day: Int32Array;
}

/** One joint draw of everything unknown about stays; buffers are reused from replication to replication. */
export interface StayDraw {
  /** Departure hazard, outflow factor included, per hour: [stream · segments + segment], streams area-major. */
  hazard: Float64Array;
  /** Cumulative shares of the first three dispositions: [(area · shareBlocks + shareBlock) · 3 + i]. */
  shareSteps: Float64Array;
  /** Outflow factor of the first day: others, admitted. */
  firstFactor: [others: number, admitted: number];
}

/** The same with the hazards added up, which is all that replications of need ask for. */
export interface SpentDraw extends Pick<StayDraw, 'shareSteps' | 'firstFactor'> {
  /** ∫ hazard from the start to each segment's start and to the end of the last: [stream · (segments + 2) + segment]; the last entry of a row is Infinity. */
  spent: Float64Array;
}

/** Draws stays' parameters; `outflow` has a stream of its own so that a change of one leaves the other alone. */
type Draw<Out> = (parameters: RandomStream, outflow: RandomStream, out: Out) => void;
export type DrawStays = Draw<StayDraw>;
export type DrawSpent = Draw<SpentDraw>;

/** Buffers for draws. */
export function makeStayBuffers(stay: StayModel, segments: number): StayDraw {
  const shareBlocks = 24 / stay.shareBlockHours;
  return {
    hazard: new Float64Array(stay.streams.length * segments),
    shareSteps: new Float64Array(stay.areas * shareBlocks * 3),
    firstFactor: [1, 1],
  };
}

/** Stays at their posterior means, without outflow variation: what the exact methods and the choice of law stand on. */
export function expectedStays(stay: StayModel, segments: StaySegments): StayDraw {
  const count = segments.block.length;
  const out = makeStayBuffers(stay, count);
  stay.streams.forEach((stream, s) => {
    const hazards = blockHazards(stream);
    for (let k = 0; k < count; k += 1) out.hazard[s * count + k] = hazards[segments.block[k]];
  });
  let at = 0;
  for (const shares of stay.shares) {
    for (const block of expectedShares(shares)) {
      out.shareSteps[at] = block[0];
      out.shareSteps[at + 1] = block[0] + block[1];
      out.shareSteps[at + 2] = block[0] + block[1] + block[2];
      at += 3;
    }
  }
  return out;
}

/**
 * Makes the joint draw of hazards, shares and outflow: μ from its gamma posterior, each block's factor given μ, shares
 * from their Dirichlet posterior, the outflow factor's variance and correlation from their errors, its path as AR(1) of
 * the logarithm with mean 1, and the error of the level it leaves. Only blocks that the horizon touches are drawn.
 * Cost: one gamma draw a stream and block touched.
 */
export function makeStayDraw(stay: StayModel, segments: StaySegments): DrawStays {
  const errors = makeStayErrors(stay, segments);
  const count = segments.block.length;
  const { streams, group, blockHazard, blocks, blockPlace, factors } = errors;
  const { day } = segments;
  return (parameters, outflow, out) => {
    errors.draw(parameters, outflow);
    errors.layShares(out);
    const { hazard } = out;
    for (let n = 0; n < streams.length; n += 1) {
      const factor = factors[group[n]];
      const from = streams[n] * count;
      for (let k = 0; k < count; k += 1) hazard[from + k] = blockHazard[n * blocks + blockPlace[k]] * factor[day[k]];
    }
  };
}

/** The draw of `makeStayDraw`, to the digit, with the hazards added up over segments of the given lengths in hours. */
export function makeSpentDraw(stay: StayModel, segments: StaySegments, hours: ArrayLike<number>): DrawSpent {
  const errors = makeStayErrors(stay, segments);
  const count = segments.block.length;
  const { streams, group, blockHazard, blocks, blockPlace, factors } = errors;
  const { day } = segments;
  const weights = [new Float64Array(count), new Float64Array(count)];
  return (parameters, outflow, out) => {
    errors.draw(parameters, outflow);
    errors.layShares(out);
    for (let g = 0; g < 2; g += 1) for (let k = 0; k < count; k += 1) weights[g][k] = factors[g][day[k]] * hours[k];
    // Local names: captured ones are looked up again at every store.
    const spent = out.spent;
    const hazard = blockHazard;
    const place = blockPlace;
    for (let n = 0; n < streams.length; n += 1) {
      const weight = weights[group[n]];
      const from = streams[n] * (count + 2) + 1;
      const first = n * blocks;
      let sum = 0;
      for (let k = 0; k < count; k += 1) {
        sum += hazard[first + place[k]] * weight[k];
        spent[from + k] = sum;
      }
    }
  };
}

/** Blocks and days of the segments of a horizon. @param localHour the local hour of each segment. */
export function staySegments(
  stay: StayModel,
  localHour: ArrayLike<number>,
  blockAt: (localHour: number) => number,
): StaySegments {
  const count = localHour.length;
  const segments = { block: new Uint8Array(count), shareBlock: new Uint8Array(count), day: new Int32Array(count) };
  const dayOf = (hour: number): number => Math.floor((hour - stay.outflowDayStartsAt) / 24);
  for (let k = 0; k < count; k += 1) {
    segments.block[k] = blockAt(localHour[k]);
    segments.shareBlock[k] = Math.floor((((localHour[k] % 24) + 24) % 24) / stay.shareBlockHours);
    // A clock set back over midnight must not lead to a day before the first.
    segments.day[k] = Math.max(0, dayOf(localHour[k]) - dayOf(localHour[0]));
  }
  return segments;
}
