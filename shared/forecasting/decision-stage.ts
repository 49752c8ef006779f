import { expectedPresent } from './census-start.ts';
import type { ExpectedPresent, ModelledPast } from './census-start.ts';
import { admittedStream, boardingStream, decisionStage, streamsPerArea } from './stay-model.ts';
import type { StayModel, StayShape } from './stay-model.ts';
import { hazardAt } from './stay-shape.ts';

/**
 * A stay model as outlooks use it. In a staged area the admitted stream is the stage to the admission decision, and who
 * ends it goes on into the boarding stream, whose hazard is then that of the clock, not that of the whole stay: wards that
 * take nobody at night hold those decided, not those still being treated.
 */
export interface StagedStays extends StayModel {
  /** By area: whether admitted patients pass through two stages. */
  staged: boolean[];
}

/** Puts the stage to the decision in the admitted stream's place wherever it was fitted. */
export function stagedStays(stay: StayModel): StagedStays {
  const streams = stay.streams.slice();
  const staged = Array.from({ length: stay.areas }, (_, area) => {
    const stage = stay.toDecision?.[area] ?? null;
    if (stage !== null) streams[area * streamsPerArea + admittedStream] = stage;
    return stage !== null;
  });
  return { ...stay, streams, staged };
}

/** Place of the outflow factor that moves a stream: 0 the others', 1 the admitted patients'. */
export function outflowPlace(stay: StayModel, stream: number): 0 | 1 {
  if (stream === decisionStage) return stay.decisionFollows === 'admitted' ? 1 : 0;
  return stream === admittedStream || stream === boardingStream ? 1 : 0;
}

/**
 * Admission decisions an hour in each segment: who ends the first stage there, of those who arrived at `rate`.
 * @param shape the stage's law in operational time, null is exponential. @param present share of one patient (or mean
 * number) in the stage at the start, and the law of what remains for them.
 * Cost: segments for the exponential, else segments squared.
 */
export function decisionsPerHour(
  hours: ArrayLike<number>,
  rate: ArrayLike<number>,
  hazard: ArrayLike<number>,
  shape: StayShape | null,
  present: { mean: number; remaining: StayShape | null } = { mean: 0, remaining: null },
): Float64Array {
  const count = hours.length;
  const decided = new Float64Array(count);
  const leave = (patients: number, from: number, ageBefore: number, law: StayShape | null): void => {
    let age = ageBefore;
    let before = age > 0 ? Math.exp(-hazardAt(law, age)) : 1;
    for (let k = from; k < count && before > 1e-9; k += 1) {
      age += hazard[k] * hours[k];
      const after = age > 0 ? Math.exp(-hazardAt(law, age)) : 1;
      decided[k] += patients * (before - after);
      before = after;
    }
  };
  if (present.mean > 0) leave(present.mean, 0, 0, present.remaining);
  if (shape === null) {
    let mean = 0;
    for (let k = 0; k < count; k += 1) {
      const spent = hazard[k] * hours[k];
      const filled = hazard[k] > 1e-9 ? -Math.expm1(-spent) / hazard[k] : hours[k];
      const after = mean * Math.exp(-spent) + rate[k] * filled;
      decided[k] += mean + rate[k] * hours[k] - after;
      mean = after;
    }
  } else {
    for (let from = 0; from < count; from += 1) {
      if (!(rate[from] > 0)) continue;
      // Each half of a segment's arrivals comes at its middle; what of the segment is gone by then is no age.
      for (const gone of [0.25, 0.75])
        leave((rate[from] * hours[from]) / 2, from, -gone * hazard[from] * hours[from], shape);
    }
  }
  return decided.map((patients, k) => (hours[k] > 0 ? patients / hours[k] : 0));
}

/** Flows with the decisions as what comes into the boarding stream. */
export function withDecisions(flow: ModelledPast, shape: StayShape | null): ModelledPast {
  const { hours, hazardPerHour } = flow;
  const ratePerHour = flow.ratePerHour.slice();
  ratePerHour[boardingStream] = decisionsPerHour(
    hours,
    ratePerHour[admittedStream],
    hazardPerHour[admittedStream],
    shape,
  );
  return { ...flow, ratePerHour };
}

/** Who is present in a staged area by the model: of the admitted those not yet decided, and as boarding those who are. */
export function presentByStage(past: ModelledPast, shapes: readonly (StayShape | null)[]): ExpectedPresent {
  return expectedPresent(withDecisions(past, shapes[admittedStream]), shapes);
}
