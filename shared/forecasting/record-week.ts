import { highestExcess } from './need-part.ts';
import { cutPieces } from './need-pieces.ts';
import type { NeedPlan } from './need-plan.ts';
import { pieces as pieceRoom, scanNeed } from './patient-loops.ts';
import type { ReplicationTrace } from './record-need.ts';

/** Counts from a run of replications of a week outlook: typed arrays, so that sums of parts are the whole however it was split. */
export interface WeekPart {
  fromReplication: number;
  toReplication: number;
  /** Room of the histograms: need of an area and of all pooled, and admissions of a day. */
  size: number;
  pooledSize: number;
  daySize: number;
  /** [(area · hours + hour) · size + need] at the full hour; the last row of `pooledNeed` is the department. */
  need: Int32Array;
  pooledNeed: Int32Array;
  /** [area · hours + hour]: replications short at the full hour, and at any time within the hour; last row: pooled. */
  short: Int32Array;
  shortWithin: Int32Array;
  /** [hour], [shift]: replications with some area short at the full hour, and some time in the shift. */
  someShort: Int32Array;
  someShortByShift: Int32Array;
  /** [(area · shifts + shift) · size + need]: highest need; and of what need exceeded the planned beds by at most. */
  shiftPeak: Int32Array;
  shiftExcess: Int32Array;
  pooledPeak: Int32Array;
  /** [shift]: replications with more need than beds in all. */
  pooledShort: Int32Array;
  /** [(area · days + day) · daySize + count], the department in the last row. */
  admittedLeaving: Int32Array;
  arrivalsToAdmit: Int32Array;
}

/** Where hours belong and how much room days take. */
export interface WeekDays {
  count: number;
  /** Day of every hour, or −1. */
  dayOfHour: Int16Array;
  /** Most admissions a day that a histogram can tell. */
  highest: number;
}

const width = highestExcess + 1;

/** An empty part for replications [from, to). */
export function makeWeekPart(plan: NeedPlan, days: WeekDays, from: number, to: number): WeekPart {
  const areas = plan.areas.length;
  const hours = plan.hourTo.length;
  const shifts = plan.shiftTo.length;
  const size = plan.areas.reduce((most, area) => Math.max(most, area.highest), 0) + 1;
  const pooledSize = plan.areas.reduce((sum, area) => sum + area.highest, 0) + 1;
  const daySize = days.highest + 1;
  return {
    fromReplication: from,
    toReplication: to,
    size,
    pooledSize,
    daySize,
    need: new Int32Array(areas * hours * size),
    pooledNeed: new Int32Array(hours * pooledSize),
    short: new Int32Array((areas + 1) * hours),
    shortWithin: new Int32Array((areas + 1) * hours),
    someShort: new Int32Array(hours),
    someShortByShift: new Int32Array(shifts),
    shiftPeak: new Int32Array(areas * shifts * size),
    shiftExcess: new Int32Array(areas * shifts * width),
    pooledPeak: new Int32Array(shifts * pooledSize),
    pooledShort: new Int32Array(shifts),
    admittedLeaving: new Int32Array((areas + 1) * days.count * daySize),
    arrivalsToAdmit: new Int32Array((areas + 1) * days.count * daySize),
  };
}

/**
 * Makes the function that adds one replication to a part. The trace's moves lie in the memory of the patients' loops, and
 * so does what this works with. Cost of a call: one pass over the bins of every area, about 2 ns a bin.
 */
export function makeWeekRecorder(plan: NeedPlan, days: WeekDays, part: WeekPart): (trace: ReplicationTrace) => void {
  const areas = plan.areas.length;
  const hours = plan.hourTo.length;
  const shifts = plan.shiftTo.length;
  const { size, pooledSize, daySize } = part;
  const binBeds = plan.areas.map((area) => area.beds);
  const pieces = cutPieces(plan, binBeds);
  const { cuts, count, hourTo, shiftFrom, shiftTo } = pieces;
  const beds = binBeds.map((own) => Int32Array.from({ length: count }, (_, p) => own[cuts[p]]));
  const pooledBeds = Int32Array.from({ length: count }, (_, p) => beds.reduce((sum, own) => sum + own[p], 0));
  const most = pieceRoom.most;
  const last = pieceRoom.last;
  const someHour = new Uint8Array(hours);
  const someShift = new Uint8Array(shifts);
  const dayIn = new Int32Array((areas + 1) * days.count);
  const dayOut = new Int32Array((areas + 1) * days.count);

  /** Need by hour in one row of scanned pieces. */
  function addHours(row: number, own: Int32Array, into: Int32Array, first: number, room: number, some: boolean): void {
    let p = 0;
    for (let h = 0; h < hours; h += 1) {
      const end = hourTo[h];
      let within = 0;
      for (; p < end; p += 1) if (most[p] > own[p]) within = 1;
      const n = last[end - 1];
      into[(first + h) * room + (n < room ? n : room - 1)] += 1;
      part.shortWithin[row * hours + h] += within;
      if (n > own[end - 1]) {
        part.short[row * hours + h] += 1;
        if (some) someHour[h] = 1;
      }
    }
  }

  function addShifts(a: number): void {
    const own = beds[a];
    for (let s = 0; s < shifts; s += 1) {
      let highest = 0;
      let excess = 0;
      for (let p = shiftFrom[s]; p < shiftTo[s]; p += 1) {
        if (most[p] > highest) highest = most[p];
        if (most[p] - own[p] > excess) excess = most[p] - own[p];
      }
      const place = a * shifts + s;
      part.shiftPeak[place * size + (highest < size ? highest : size - 1)] += 1;
      part.shiftExcess[place * width + (excess < highestExcess ? excess : highestExcess)] += 1;
      if (excess > 0) someShift[s] = 1;
    }
  }

  function addPooledShifts(): void {
    for (let s = 0; s < shifts; s += 1) {
      let highest = 0;
      let short = 0;
      for (let p = shiftFrom[s]; p < shiftTo[s]; p += 1) {
        if (most[p] > highest) highest = most[p];
        if (most[p] > pooledBeds[p]) short = 1;
      }
      part.pooledPeak[s * pooledSize + (highest < pooledSize ? highest : pooledSize - 1)] += 1;
      part.pooledShort[s] += short;
    }
  }

  function addDays({ admittedIn, admittedOut }: ReplicationTrace): void {
    dayIn.fill(0);
    dayOut.fill(0);
    for (let a = 0; a < areas; a += 1) {
      const first = a * (hours + 1) + 1;
      for (let h = 0; h < hours; h += 1) {
        const day = days.dayOfHour[h];
        if (day < 0) continue;
        for (const row of [a, areas]) {
          dayIn[row * days.count + day] += admittedIn[first + h];
          dayOut[row * days.count + day] += admittedOut[first + h];
        }
      }
    }
    for (let i = 0; i < dayIn.length; i += 1) {
      part.arrivalsToAdmit[i * daySize + Math.min(daySize - 1, dayIn[i])] += 1;
      part.admittedLeaving[i * daySize + Math.min(daySize - 1, dayOut[i])] += 1;
    }
  }

  pieceRoom.end.set(cuts);
  return (trace) => {
    someHour.fill(0);
    someShift.fill(0);
    for (let a = 0; a < areas; a += 1) {
      scanNeed(a, plan.bins, count);
      addHours(a, beds[a], part.need, a * hours, size, true);
      addShifts(a);
    }
    scanNeed(areas, plan.bins, count);
    addHours(areas, pooledBeds, part.pooledNeed, 0, pooledSize, false);
    addPooledShifts();
    addDays(trace);
    for (let h = 0; h < hours; h += 1) part.someShort[h] += someHour[h];
    for (let s = 0; s < shifts; s += 1) part.someShortByShift[s] += someShift[s];
  };
}

const counted = [
  'need',
  'pooledNeed',
  'short',
  'shortWithin',
  'someShort',
  'someShortByShift',
  'shiftPeak',
  'shiftExcess',
  'pooledPeak',
  'pooledShort',
  'admittedLeaving',
  'arrivalsToAdmit',
] as const;

/**
 * Adds parts up; the order they came in and where they were split make no difference.
 * @throws RangeError when parts overlap or leave a hole.
 */
export function mergeWeekParts(parts: readonly WeekPart[]): WeekPart {
  if (parts.length === 0) throw new RangeError('no parts to merge');
  const sorted = [...parts].sort((a, b) => a.fromReplication - b.fromReplication);
  const whole = { ...sorted[0] };
  for (const key of counted) whole[key] = sorted[0][key].slice();
  for (const part of sorted.slice(1)) {
    if (part.fromReplication !== whole.toReplication) {
      throw new RangeError(`replications ${whole.toReplication}..${part.fromReplication} are missing or double`);
    }
    whole.toReplication = part.toReplication;
    for (const key of counted) {
      const into = whole[key];
      const values = part[key];
      for (let i = 0; i < values.length; i += 1) into[i] += values[i];
    }
  }
  return whole;
}
