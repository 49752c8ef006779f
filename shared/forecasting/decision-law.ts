import { expectedPresent } from './census-start.ts';
import type { ExpectedPresent, ModelledPast } from './census-start.ts';
import type { CollectedStays } from './collect-stays.ts';
import type { BlockCells } from './stay-clock.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { DecisionLaw, StayShape } from './stay-model.ts';
import { fitStayShapes, hazardAt } from './stay-shape.ts';

/** Fewer decisions than this say too little of when they come. */
const fewestDecisions = 20;

/** The exponential law of a mean, as a shape. */
function exponentialOf(mean: number): StayShape {
  return { step: 1 / 16, stays: [0, mean / 16], tail: mean };
}

/**
 * How an admitted stay is cut in two by the decision: the laws of the time before it and of boarding, both in operational
 * time of the admitted stay (∫ μ·g·f dt, in means of the whole stay). Kaplan & Meier as for whole stays; exponential with the
 * mean that hours tell where there are fewer than 200, and null under 20.
 * @param clock operational time at the start of every cell, [stream][cell]. Cost: linear in stays.
 */
export function fitDecisionLaws(
  stays: CollectedStays,
  areas: number,
  cells: BlockCells,
  blockHours: number,
  clock: readonly Float64Array[],
): (DecisionLaw | null)[] {
  const boarders: number[] = [];
  for (let i = 0; i < stays.length; i += 1) if (stays.stream[i] % streamsPerArea === boardingStream) boarders.push(i);
  const areaOf = (i: number): number => Math.floor(stays.stream[i] / streamsPerArea);
  // The whole stay stands just before its boarding.
  const length = 2 * boarders.length;
  const halves = {
    length,
    stream: Uint16Array.from({ length }, (_, h) => 2 * areaOf(boarders[h >> 1]) + (h & 1)),
    startAt: Float64Array.from({ length }, (_, h) => stays.startAt[boarders[h >> 1] - ((h & 1) ^ 1)]),
    endAt: Float64Array.from({ length }, (_, h) =>
      (h & 1) === 0 ? stays.startAt[boarders[h >> 1]] : stays.endAt[boarders[h >> 1]],
    ),
    departed: Uint8Array.from({ length }, (_, h) => ((h & 1) === 0 ? 1 : stays.departed[boarders[h >> 1]])),
  };
  const clocks = Array.from(
    { length: 2 * areas },
    (_, s) => clock[Math.floor(s / 2) * streamsPerArea + admittedStream],
  );
  const shapes = fitStayShapes(halves, cells, blockHours, clocks);
  const decided = new Float64Array(areas);
  for (const i of boarders) decided[areaOf(i)] += 1;
  return Array.from(decided, (count, area) => {
    if (count < fewestDecisions) return null;
    const share = stays.decision.before[area] / Math.max(stays.decision.whole[area], 1e-9);
    return {
      before: shapes[2 * area] ?? exponentialOf(Math.max(share, 0.01)),
      boarding: shapes[2 * area + 1] ?? exponentialOf(Math.max(1 - share, 0.01)),
    };
  });
}

/** Operational time is cut at this width, in means of the whole stay, up to `cells` of it; what lies past the end counts at the end. */
const width = 0.05;
const cells = 240;
const remainingStep = 1 / 32;
const remainingEntries = 192;

/** Survival at the cuts 0, width, 2·width, … */
function survivalAtCuts(shape: StayShape): Float64Array {
  return Float64Array.from({ length: cells + 1 }, (_, i) => Math.exp(-hazardAt(shape, i * width)));
}

/** Linear between the cuts. */
function between(values: Float64Array, time: number): number {
  const place = time / width;
  const cell = Math.floor(place);
  return cell >= cells ? values[cells] : values[cell] + (place - cell) * (values[cell + 1] - values[cell]);
}

/** Survival at the cuts as an inverse cumulative hazard. */
function shapeOfSurvival(survival: Float64Array, tail: number): StayShape {
  const stays = [0];
  let before = 0;
  for (let i = 1; i <= cells && stays.length < remainingEntries; i += 1) {
    const now = -Math.log(Math.max(survival[i], 1e-12));
    while (stays.length * remainingStep <= now && stays.length < remainingEntries) {
      stays.push((i - 1 + (stays.length * remainingStep - before) / (now - before)) * width);
    }
    before = now;
  }
  return { step: remainingStep, stays, tail };
}

/**
 * Who is present by the model where decision times are known: as `expectedPresent`, but of the admitted only those not
 * yet decided, who still have the rest of the time to their decision and then the whole of their boarding ahead, and
 * boarders by how long ago the model has them decided.
 * P(V ∈ dv) ∝ ∫ λ(t − a)·f_D(A(a) + v) da for the time V to the decision, remaining stay V + B with B boarding.
 * Cost: past segments² + cells².
 */
export function presentByDecision(
  past: ModelledPast,
  shapes: readonly (StayShape | null)[],
  law: DecisionLaw,
): ExpectedPresent {
  const count = past.hours.length;
  const rate = past.ratePerHour[admittedStream];
  const hazard = past.hazardPerHour[admittedStream];
  const undecidedAt = survivalAtCuts(law.before);
  const decidedPerHour = new Float64Array(count);
  const arrivalsByAge = new Float64Array(cells + 1);
  for (let from = 0; from < count; from += 1) {
    for (const share of [0.25, 0.75]) {
      const arrivals = (rate[from] * past.hours[from]) / 2;
      let age = -share * hazard[from] * past.hours[from];
      let before = 1;
      for (let k = from; k < count; k += 1) {
        age += hazard[k] * past.hours[k];
        const after = between(undecidedAt, age);
        decidedPerHour[k] += (arrivals * (before - after)) / past.hours[k];
        before = after;
      }
      // Shared by the two cuts on either side, so that the mean age stays.
      const cell = Math.min(cells - 1, Math.floor(age / width));
      const upper = Math.min(1, age / width - cell);
      arrivalsByAge[cell] += arrivals * (1 - upper);
      arrivalsByAge[cell + 1] += arrivals * upper;
    }
  }
  const toDecision = new Float64Array(cells);
  let undecided = 0;
  arrivalsByAge.forEach((arrivals, cell) => {
    if (arrivals === 0) return;
    undecided += arrivals * undecidedAt[cell];
    for (let v = 0; cell + v < cells; v += 1) {
      toDecision[v] += arrivals * (undecidedAt[cell + v] - undecidedAt[cell + v + 1]);
    }
  });
  const ratePerHour = past.ratePerHour.slice();
  ratePerHour[boardingStream] = decidedPerHour;
  const { means, remaining } = expectedPresent({ ...past, ratePerHour }, shapes);
  if (undecided > 0) {
    const boards = survivalAtCuts(law.boarding);
    const survival = Float64Array.from({ length: cells + 1 }, (_, i) => {
      let gone = 0;
      // Decisions fall in the middle of their cells.
      for (let v = 0; v < i; v += 1) gone += toDecision[v] * (1 - (boards[i - v] + boards[i - v - 1]) / 2);
      return 1 - gone / undecided;
    });
    remaining[admittedStream] = shapeOfSurvival(survival, law.boarding.tail);
  }
  return { means, remaining, undecidedAdmitted: undecided };
}
