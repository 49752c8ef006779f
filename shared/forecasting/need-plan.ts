import type { RandomStream } from '../stochastic/random.ts';
import type { StayShape } from './stay-model.ts';
import type { DrawSpent } from './stay-draw.ts';

/** Width of a time bin, seconds: "any time within the hour" looks at the end of every bin, twelve times an hour. */
export const binSeconds = 300;

/** Patients counted at the start of an area, each in one of its streams with the chances of `steps` (cumulative). */
export interface StartGroup {
  patients: number;
  steps: Float64Array;
  /** The same for each of the area's `startFactors`, where who is there depends on the admitted patients' outflow so far. */
  stepsByFactor?: Float64Array[];
  /** True for patients counted as boarding: a remedy may move them out. */
  boarding: boolean;
}

/** One area of a simulation. Times are hours since the plan's start. */
export interface AreaPlan {
  /** When the area was counted, or when the model's own distribution takes its place. */
  startHours: number;
  /** Segment that begins at `startHours`. */
  startSegment: number;
  groups: StartGroup[];
  /** Without a census: mean present by stream at outflow factors `startFactors`, [stream][factor]; the arrivals' factor multiplies it. */
  startMeans: Float64Array[] | null;
  startFactors: Float64Array;
  /** Expected rate of the first segment: what a drawn rate is measured against for the start without a census. */
  expectedFirstRate: number;
  /** Law of the remaining stay of those present, by stream, in means; null is exponential. */
  remaining: (StayShape | null)[];
  /** Law of a newcomer's stay, by stream, in means; null is exponential. */
  shapes: (StayShape | null)[];
  /** Staffed beds in force at the end of every bin. */
  beds: Int32Array;
  /** Patients up to whom a histogram can tell; more count as this many. */
  highest: number;
  boarders: number;
  /** True where the admitted stream ends with the decision and goes on into the boarding stream. */
  staged: boolean;
  /** By stream which outflow factor moves it: 0 the others', 1 the admitted patients'. */
  outflowPlaces: readonly (0 | 1)[];
  /** True where the chance of any shortfall within the hour is what is printed: remedies must end that. */
  wholeHour: boolean;
}

/** Waiting patients whose area is not decided: each goes to an area and stream with the chances of `steps` (cumulative over area · streams + stream). */
export interface UndecidedPlan {
  patients: number;
  startHours: number;
  startSegment: number;
  steps: Float64Array;
}

/** Everything a replication needs, made once; the same on every thread. */
export interface NeedPlan {
  seed: number;
  /** UTC seconds of time 0. */
  startAt: number;
  segments: number;
  /** Start of every segment and the end of the last, hours since the start. */
  segmentAt: Float64Array;
  shareBlock: Uint8Array;
  shareBlocks: number;
  areas: AreaPlan[];
  undecided: UndecidedPlan | null;
  bins: number;
  /** For every hour the bins that end within it: first and one past the last. */
  hourFrom: Int32Array;
  hourTo: Int32Array;
  /** Hour that every bin ends in, counted from 1; 0 before the first and past the last. One more entry than bins. */
  hourOfBin: Uint16Array;
  /** For every shift what is left of it: first bin and one past the last. */
  shiftFrom: Int32Array;
  shiftTo: Int32Array;
  /** One past the last bin of the coming night. */
  nightTo: number;
  drawRates: (stream: RandomStream, out: Float64Array[]) => void;
  drawStays: DrawSpent;
}

/** Substreams, so that a change of one leaves every other draw as it was (common random numbers). */
export const purposes = {
  parameters: 1,
  rates: 2,
  outflow: 3,
  present: 4,
  arrivals: 5,
  undecided: 6,
  thinning: 7,
  extra: 8,
  surge: 9,
} as const;

/** Changes tried against "as is"; the draws stay the same, so that differences can be taken replication by replication. */
export interface NeedChange {
  /** Factor on arrivals by area, 1 for none: above 1 adds arrivals on a substream of their own, below 1 thins by a uniform each arrival carries. */
  demand?: readonly number[];
  /** Factor on stays by area and stream, [area · streamsPerArea + stream], 1 for none: the same draw scaled. */
  stay?: readonly number[];
  /** Extra arrivals an hour by area between two times (hours since the start): a surge on a substream of its own. */
  surge?: { area: number; fromHours: number; toHours: number; ratePerHour: number }[];
  /** Staffed beds by bin instead of the plan's, per area; null keeps them. */
  beds?: (Int32Array | null)[];
  /** Boarding patients of an area who are gone by a time (hours since the start) if still there. */
  boardersOut?: { area: number; patients: number; byHours: number }[];
  /** Between two times an area takes no arrivals: they go to another area, or elsewhere with `to` null. Ascending for one area. */
  closed?: { area: number; fromHours: number; toHours: number; to: number | null }[];
}
