import type { ModelledPast } from './census-start.ts';
import { withDecisions } from './decision-stage.ts';
import type { StagedStays } from './decision-stage.ts';
import type { StayDraw, StaySegments } from './stay-draw.ts';
import { boardingStream, streamsPerArea } from './stay-model.ts';
import type { StayModel } from './stay-model.ts';

/** Expected rates and stays over a stretch of time. */
export interface FlowSpan {
  hours: Float64Array;
  /** The area's arrivals an hour by segment. */
  rate: Float64Array;
  staying: StaySegments;
  draw: StayDraw;
}

/** One area's expected flows by stream: the past that its census came from, and what lies ahead. */
export interface AreaFlows {
  /** Ends when the area was counted. */
  past: ModelledPast;
  /** From the plan's start; before the area's own start no arrivals. */
  ahead: ModelledPast;
  /** Arrivals an hour by stream from the plan's start, the time before the area's own start included. */
  arriving: Float64Array[];
  startSegment: number;
  /** Highest expected number of newcomers still there, and all expected arrivals. */
  peakNewcomers: number;
  arrivals: number;
}

function byStream(stay: StayModel, area: number, span: FlowSpan): ModelledPast {
  const count = span.hours.length;
  const shareBlocks = 24 / stay.shareBlockHours;
  const ratePerHour = Array.from({ length: streamsPerArea }, () => new Float64Array(count));
  const hazardPerHour = Array.from({ length: streamsPerArea }, (_, s) =>
    span.draw.hazard.slice((area * streamsPerArea + s) * count, (area * streamsPerArea + s + 1) * count),
  );
  for (let k = 0; k < count; k += 1) {
    const at = (area * shareBlocks + span.staying.shareBlock[k]) * 3;
    const steps = [0, ...span.draw.shareSteps.slice(at, at + 3), 1];
    for (let d = 0; d < boardingStream; d += 1) ratePerHour[d][k] = span.rate[k] * (steps[d + 1] - steps[d]);
  }
  return { hours: span.hours, ratePerHour, hazardPerHour };
}

/** Splits an area's rates over its streams, and joins what lies between the plan's start and the area's own to its past. */
export function areaFlows(
  stay: StagedStays,
  area: number,
  past: FlowSpan,
  ahead: FlowSpan,
  startSegment: number,
): AreaFlows {
  const before = byStream(stay, area, past);
  const after = byStream(stay, area, ahead);
  const join = (a: Float64Array, b: Float64Array): Float64Array =>
    Float64Array.from([...a, ...b.subarray(0, startSegment)]);
  const whole: ModelledPast = {
    hours: join(before.hours, after.hours),
    ratePerHour: before.ratePerHour.map((rate, s) => join(rate, after.ratePerHour[s])),
    hazardPerHour: before.hazardPerHour.map((hazard, s) => join(hazard, after.hazardPerHour[s])),
  };
  const arriving = after.ratePerHour.map((rate) => rate.slice());
  for (const rate of after.ratePerHour) rate.fill(0, 0, startSegment);
  let peakNewcomers = 0;
  let arrivals = 0;
  const total = new Float64Array(after.hours.length);
  const inside = stay.staged[area] ? withDecisions(after, null) : after;
  inside.ratePerHour.forEach((rate, s) => {
    let mean = 0;
    for (let k = 0; k < rate.length; k += 1) {
      const hazard = after.hazardPerHour[s][k];
      const spent = hazard * after.hours[k];
      // m′ = λ − μ·m within a segment.
      mean = mean * Math.exp(-spent) + rate[k] * (hazard > 1e-9 ? -Math.expm1(-spent) / hazard : after.hours[k]);
      total[k] += mean;
      if (s !== boardingStream) arrivals += rate[k] * after.hours[k];
    }
  });
  for (const mean of total) peakNewcomers = Math.max(peakNewcomers, mean);
  return { past: whole, ahead: after, arriving, startSegment, peakNewcomers, arrivals };
}
