import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';
import { takeLoopRoom } from './patient-loops.ts';
import { QuickStream } from './quick-stream.ts';
import type { ReplicationTrace } from './record-need.ts';
import type { SpentDraw } from './stay-draw.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { StayShape } from './stay-model.ts';

/** Bins an hour. */
export const binsPerHour = 3600 / binSeconds;

/** Laws of stays of all streams in one table, so that a draw is a few look-ups: see `stayAt`. */
export interface StayTables {
  /** Stays at multiples of a step of cumulative hazard, all streams one after the other. */
  stays: Float64Array;
  /** By stream: its first entry, entries after the first, steps to a unit of hazard, hazard at the last entry, and stay a unit of hazard past it. */
  from: Int32Array;
  last: Int32Array;
  perHazard: Float64Array;
  end: Float64Array;
  tail: Float64Array;
}

/** Buffers of one replication, used again for the next. */
export interface ReplicationState {
  plan: NeedPlan;
  change: NeedChange;
  /** Drawn rates, [area][segment]. */
  rates: Float64Array[];
  stays: SpentDraw;
  /** Laws of newcomers' stays by stream, then of what remains for those present. */
  laws: StayTables;
  /** Start of every segment and the end of the last, and lengths (0 after the last), in bins. */
  segmentBin: Float64Array;
  segmentBins: Float64Array;
  trace: ReplicationTrace;
  /** Whether any area is staged: the admitted then have a boarding stay drawn with them. */
  stages: boolean;
  /** What the patients' loops must know of the plan. */
  sizes: { areas: number; segments: number; bins: number; hours: number };
  /** The stream of what is being drawn, and that of the uniforms for thinning. */
  stream: QuickStream;
  thinning: QuickStream;
  /** The batch last drawn: of arrivals segment, share of it gone by, stream within the area and stay; of those present the end. */
  batch: {
    segment: Int32Array;
    share: Float64Array;
    inArea: Int32Array;
    stay: Float64Array;
    boardingStay: Float64Array;
    until: Float64Array;
  };
}

function stayTables(shapes: readonly (StayShape | null)[]): StayTables {
  const from = new Int32Array(shapes.length);
  const stays: number[] = [];
  shapes.forEach((shape, s) => {
    from[s] = stays.length;
    stays.push(...(shape?.stays ?? [0]));
  });
  return {
    stays: Float64Array.from(stays),
    from,
    // The exponential law is all tail.
    last: Int32Array.from(shapes, (shape) => (shape === null ? 0 : shape.stays.length - 1)),
    perHazard: Float64Array.from(shapes, (shape) => (shape === null ? 1 : 1 / shape.step)),
    end: Float64Array.from(shapes, (shape) => (shape === null ? 0 : (shape.stays.length - 1) * shape.step)),
    tail: Float64Array.from(shapes, (shape) => (shape === null ? 1 : shape.tail)),
  };
}

/**
 * Buffers for a plan, emptied. They lie in the one memory of the patients' loops: a state holds until the next is made.
 */
export function makeReplicationState(plan: NeedPlan, change: NeedChange): ReplicationState {
  const { segments, areas, bins, segmentAt } = plan;
  const laws = stayTables([...areas.flatMap((area) => area.shapes), ...areas.flatMap((area) => area.remaining)]);
  const room = takeLoopRoom({
    areas: areas.length,
    segments,
    bins,
    hours: plan.hourTo.length,
    shareBlocks: plan.shareBlocks,
    lawEntries: laws.stays.length,
  });
  const row = segments + 2;
  // A stay that outlasts the horizon stops here: no test for it in the patients' loop.
  for (let end = row - 1; end < room.spent.length; end += row) room.spent[end] = Infinity;
  room.segmentBin.set(segmentAt.map((at, k) => (k === segments ? bins : at * binsPerHour)));
  room.segmentBins.set(segmentAt.map((at, k) => (k === segments ? 0 : (segmentAt[k + 1] - at) * binsPerHour)));
  room.shareBlock.set(plan.shareBlock);
  room.hourOfBin.set(plan.hourOfBin);
  room.stayFactor.fill(1);
  if (change.stay !== undefined) room.stayFactor.set(change.stay);
  for (const key of ['stays', 'from', 'last', 'perHazard', 'end', 'tail'] as const) {
    room.laws[key].set(laws[key]);
  }
  return {
    plan,
    change,
    rates: areas.map(() => new Float64Array(segments)),
    stays: { spent: room.spent, shareSteps: room.shareSteps, firstFactor: [1, 1] },
    laws: room.laws,
    segmentBin: room.segmentBin,
    segmentBins: room.segmentBins,
    stages: areas.some((area) => area.staged),
    sizes: { areas: areas.length, segments, bins, hours: plan.hourTo.length },
    trace: {
      patients: 0,
      moves: room.moves,
      admittedOut: room.admittedOut,
      admittedIn: room.admittedIn,
      boarderBin: areas.map((area) => new Int32Array(area.boarders)),
    },
    stream: new QuickStream(),
    thinning: new QuickStream(),
    batch: room.batch,
  };
}

/** The stay, in means of stream s, at a cumulative hazard. */
function stayOf(tables: StayTables, s: number, hazard: number): number {
  const place = hazard * tables.perHazard[s];
  const last = tables.last[s];
  const from = tables.from[s];
  if (place >= last) return tables.stays[from + last] + (hazard - tables.end[s]) * tables.tail[s];
  const index = place | 0;
  const before = tables.stays[from + index];
  return before + (place - index) * (tables.stays[from + index + 1] - before);
}

/**
 * When a stay of cumulative hazard x ends that begins a share of the way into segment k: bins since the start, at least
 * `bins` for one that outlasts the horizon.
 */
function departureOf(state: ReplicationState, s: number, k: number, share: number, x: number): number {
  const { spent } = state.stays;
  const base = s * (state.plan.segments + 2);
  const before = spent[base + k];
  const target = before + share * (spent[base + k + 1] - before) + x;
  let at = k;
  while (spent[base + at + 1] <= target) at += 1;
  const from = spent[base + at];
  return state.segmentBin[at] + ((target - from) / (spent[base + at + 1] - from)) * state.segmentBins[at];
}

/**
 * When a patient of stream `inArea` of area a leaves who comes a share of the way into segment k: an admitted one of a
 * staged area boards after the decision. @param stay, boarding drawn cumulative hazards.
 */
export function lastDeparture(
  state: ReplicationState,
  a: number,
  inArea: number,
  k: number,
  share: number,
  stay: number,
  boarding: number,
): number {
  const first = a * streamsPerArea;
  const stayIn = (s: number, hazard: number): number => stayOf(state.laws, s, hazard) * (state.change.stay?.[s] ?? 1);
  const at = departureOf(state, first + inArea, k, share, stayIn(first + inArea, stay));
  if (inArea !== admittedStream || !state.plan.areas[a].staged || at >= state.plan.bins) return at;
  let decided = k;
  while (state.segmentBin[decided + 1] <= at) decided += 1;
  const gone = (at - state.segmentBin[decided]) / state.segmentBins[decided];
  const boards = first + boardingStream;
  return departureOf(state, boards, decided, gone, stayIn(boards, boarding));
}

/** Patients who come (or leave) in a bin, in the area's row and in the department's. */
export function move(state: ReplicationState, a: number, bin: number, patients: number): void {
  const { moves } = state.trace;
  const row = state.plan.bins + 1;
  moves[a * row + bin] += patients;
  moves[state.plan.areas.length * row + bin] += patients;
}

/** A patient of stream `inArea` of area a comes in a bin. */
export function enterArea(state: ReplicationState, a: number, inArea: number, bin: number): void {
  const { plan, trace } = state;
  move(state, a, bin, 1);
  if (inArea === admittedStream) trace.admittedIn[a * (plan.hourTo.length + 1) + plan.hourOfBin[bin]] += 1;
}

/** A patient of stream `inArea` of area a leaves at a time in bins; past the end it falls into the last entry, which nobody reads. */
export function leaveArea(state: ReplicationState, a: number, inArea: number, at: number): void {
  const { plan, trace } = state;
  const bin = Math.min(plan.bins, Math.floor(at));
  move(state, a, bin, -1);
  if (inArea === admittedStream || inArea === boardingStream) {
    trace.admittedOut[a * (plan.hourTo.length + 1) + plan.hourOfBin[bin]] += 1;
  }
}
