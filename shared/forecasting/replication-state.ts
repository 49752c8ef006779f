import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';
import { QuickStream } from './quick-stream.ts';
import type { ReplicationTrace } from './record-need.ts';
import type { StayDraw } from './stay-draw.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';

/** Bins an hour. */
export const binsPerHour = 3600 / binSeconds;

/** Buffers of one replication, used again for the next. */
export interface ReplicationState {
  plan: NeedPlan;
  change: NeedChange;
  /** Drawn rates, [area][segment]. */
  rates: Float64Array[];
  stays: StayDraw;
  /** ∫ hazard from the start to each segment, [stream · (segments + 1) + segment]. */
  spent: Float64Array;
  trace: ReplicationTrace;
  /** The stream of what is being drawn, and that of the uniforms for thinning. */
  stream: QuickStream;
  thinning: QuickStream;
}

/** Empty buffers for a plan. */
export function makeReplicationState(plan: NeedPlan, change: NeedChange): ReplicationState {
  const { segments, areas, bins } = plan;
  const streams = areas.length * streamsPerArea;
  const hours = plan.hourTo.length + 1;
  return {
    plan,
    change,
    rates: areas.map(() => new Float64Array(segments)),
    stays: {
      hazard: new Float64Array(streams * segments),
      shareSteps: new Float64Array(areas.length * plan.shareBlocks * 3),
      firstFactor: [1, 1],
    },
    spent: new Float64Array(streams * (segments + 1)),
    trace: {
      patients: 0,
      moves: areas.map(() => new Int32Array(bins + 1)),
      admittedOut: areas.map(() => new Int32Array(hours)),
      admittedIn: areas.map(() => new Int32Array(hours)),
      boarderBin: areas.map((area) => new Int32Array(area.boarders)),
    },
    stream: new QuickStream(),
    thinning: new QuickStream(),
  };
}

/** Adds up the drawn hazards, so that the end of a stay is found by comparison. */
export function cumulateHazards(state: ReplicationState): void {
  const { plan, stays, spent } = state;
  const { segments, segmentAt } = plan;
  const { hazard } = stays;
  const streams = plan.areas.length * streamsPerArea;
  for (let s = 0; s < streams; s += 1) {
    const base = s * (segments + 1);
    const from = s * segments;
    let sum = 0;
    for (let k = 0; k < segments; k += 1) {
      sum += hazard[from + k] * (segmentAt[k + 1] - segmentAt[k]);
      spent[base + k + 1] = sum;
    }
  }
}

/** When a stay of cumulative hazard x, begun in segment k at time t, ends: hours since the start, Infinity past the end. */
export function departureOf(state: ReplicationState, s: number, k: number, t: number, x: number): number {
  const { spent, stays } = state;
  const { segments, segmentAt } = state.plan;
  const base = s * (segments + 1);
  const from = s * segments;
  const target = spent[base + k] + stays.hazard[from + k] * (t - segmentAt[k]) + x;
  if (!(target < spent[base + segments])) return Infinity;
  let at = k;
  while (spent[base + at + 1] <= target) at += 1;
  return segmentAt[at] + (target - spent[base + at]) / stays.hazard[from + at];
}

/** Takes a patient of stream `inArea` out of area a at a time; nothing when that lies past the end. */
export function leaveArea(state: ReplicationState, a: number, inArea: number, at: number): void {
  const { plan, trace } = state;
  if (at >= plan.segmentAt[plan.segments]) return;
  const bin = Math.min(plan.bins, Math.floor(at * binsPerHour));
  trace.moves[a][bin] -= 1;
  if (inArea === admittedStream || inArea === boardingStream) trace.admittedOut[a][plan.hourOfBin[bin]] += 1;
}
