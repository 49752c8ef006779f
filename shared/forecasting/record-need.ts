import { highestExcess } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';

/** One replication: what came and went, per area. */
export interface ReplicationTrace {
  patients: number;
  /** Arrivals minus departures by bin; entry `bins` gathers what is past the end. */
  moves: Int32Array[];
  /** Admitted patients who leave, and arrivals who will be admitted, by `hourOfBin` of the plan (0: before the first hour). */
  admittedOut: Int32Array[];
  admittedIn: Int32Array[];
  /** Bin in which each counted boarder leaves; beyond the last bin if later. */
  boarderBin: Int32Array[];
}

const hoursPerBin = binSeconds / 3600;

/** Stretches of bins between any two ends of hours and shifts: hours and shifts are made of whole pieces. */
function cutPieces(plan: NeedPlan) {
  const { hourFrom, hourTo, shiftFrom, shiftTo } = plan;
  const first = hourFrom[0];
  const last = hourTo[hourTo.length - 1];
  const ends = [first, last, plan.nightTo, ...hourFrom, ...hourTo, ...shiftFrom, ...shiftTo];
  const cuts = [...new Set(ends.map((bin) => Math.min(last, Math.max(first, bin))))].sort((a, b) => a - b);
  const place = (bin: number): number => cuts.findIndex((cut) => cut >= Math.min(last, bin));
  const places = (bins: Int32Array): Int32Array => bins.map(place);
  return {
    cuts: Int32Array.from(cuts),
    count: cuts.length - 1,
    hourFrom: places(hourFrom),
    hourTo: places(hourTo),
    shiftFrom: places(shiftFrom),
    shiftTo: places(shiftTo),
    nightTo: place(plan.nightTo),
  };
}

/**
 * Makes the function that adds one replication to a part; `row` is its place within the part. Buffers are its own.
 * Cost of a call: one pass over the bins of every area.
 */
export function makeNeedRecorder(
  plan: NeedPlan,
  part: NeedPart,
  change?: NeedChange,
): (trace: ReplicationTrace, row: number) => void {
  const { bins, hourTo } = plan;
  const { areas, hours, shifts, size, pooledSize, boarderSize, flowSize } = part;
  const rows = part.toReplication - part.fromReplication;
  const areaBeds = plan.areas.map((area, a) => change?.beds?.[a] ?? area.beds);
  const pieces = cutPieces(plan);
  const { cuts, count } = pieces;
  const pooled = new Int32Array(bins);
  const pooledBeds = new Int32Array(bins);
  for (const beds of areaBeds) for (let b = 0; b < bins; b += 1) pooledBeds[b] += beds[b];
  const mostNeed = new Int32Array(count);
  const mostExcess = new Int32Array(count);
  const lastNeed = new Int32Array(count);
  const someShort = new Uint8Array(count);
  const hourShort = new Uint8Array(hours);
  const width = highestExcess + 1;

  /** Highest need and excess and the last need of every piece; returns bins short. */
  function scan(need: number, moves: Int32Array, beds: Int32Array): number {
    let n = need;
    let short = 0;
    for (let p = 0; p < count; p += 1) {
      let most = 0;
      let excess = 0;
      const end = cuts[p + 1];
      for (let b = cuts[p]; b < end; b += 1) {
        n += moves[b];
        pooled[b] += n;
        const over = n - beds[b];
        if (n > most) most = n;
        if (over > 0) {
          short += over;
          if (over > excess) excess = over;
        }
      }
      mostNeed[p] = most;
      mostExcess[p] = excess;
      lastNeed[p] = n;
    }
    return short;
  }

  /** The same for the pooled need. */
  function scanPooled(): void {
    for (let p = 0; p < count; p += 1) {
      let excess = 0;
      for (let b = cuts[p]; b < cuts[p + 1]; b += 1) {
        const over = pooled[b] - pooledBeds[b];
        if (over > excess) excess = over;
      }
      mostExcess[p] = excess;
      lastNeed[p] = pooled[cuts[p + 1] - 1];
    }
  }

  function addHours(need: Int32Array, within: Int32Array, place: number, room: number): void {
    for (let h = 0; h < hours; h += 1) {
      const n = lastNeed[pieces.hourTo[h] - 1];
      need[(place * hours + h) * room + (n < room ? n : room - 1)] += 1;
      let excess = 0;
      for (let p = pieces.hourFrom[h]; p < pieces.hourTo[h]; p += 1) if (mostExcess[p] > excess) excess = mostExcess[p];
      within[(place * hours + h) * width + (excess < highestExcess ? excess : highestExcess)] += 1;
    }
  }

  function addShifts(a: number, row: number): void {
    for (let s = 0; s < shifts; s += 1) {
      let most = 0;
      let short = 0;
      for (let p = pieces.shiftFrom[s]; p < pieces.shiftTo[s]; p += 1) {
        if (mostNeed[p] > most) most = mostNeed[p];
        if (mostExcess[p] > 0) short = 1;
      }
      part.shiftPeak[(a * shifts + s) * size + (most < size ? most : size - 1)] += 1;
      part.shiftShort[a * shifts + s] += short;
      part.shortByReplication[(a * shifts + s) * rows + row] = short;
    }
  }

  function addBoarders(a: number, beds: Int32Array, boarders: Int32Array): void {
    for (let h = 0; h < hours; h += 1) {
      const bin = hourTo[h] - 1;
      const excess = lastNeed[pieces.hourTo[h] - 1] - beds[bin];
      if (excess <= 0) continue;
      hourShort[h] = 1;
      let needed = 0;
      let gained = 0;
      while (needed < boarders.length && gained < excess) {
        if (boarders[needed] > bin) gained += 1;
        needed += 1;
      }
      part.boardersNeeded[(a * hours + h) * boarderSize + (gained < excess ? boarderSize - 1 : needed)] += 1;
    }
  }

  function addFlows(a: number, out: Int32Array, come: Int32Array): void {
    for (let h = 0; h < hours; h += 1) {
      const place = (a * hours + h) * flowSize;
      const leaving = out[h + 1];
      const coming = come[h + 1];
      part.admittedLeaving[place + (leaving < flowSize ? leaving : flowSize - 1)] += 1;
      part.arrivalsToAdmit[place + (coming < flowSize ? coming : flowSize - 1)] += 1;
    }
  }

  return (trace, row) => {
    pooled.fill(0);
    someShort.fill(0);
    hourShort.fill(0);
    let allShort = 0;
    for (let a = 0; a < areas; a += 1) {
      const moves = trace.moves[a];
      let before = 0;
      for (let b = 0; b < cuts[0]; b += 1) before += moves[b];
      const short = scan(before, moves, areaBeds[a]);
      let peak = 0;
      for (let p = 0; p < count; p += 1) {
        if (p < pieces.nightTo && mostNeed[p] > peak) peak = mostNeed[p];
        if (mostExcess[p] > 0) someShort[p] = 1;
      }
      part.peak[a * size + (peak < size ? peak : size - 1)] += 1;
      part.bedHoursShort[a * rows + row] = short * hoursPerBin;
      allShort += short;
      addHours(part.need, part.within, a, size);
      addShifts(a, row);
      addBoarders(a, areaBeds[a], trace.boarderBin[a]);
      addFlows(a, trace.admittedOut[a], trace.admittedIn[a]);
    }
    part.bedHoursShort[areas * rows + row] = allShort * hoursPerBin;
    scanPooled();
    addHours(part.pooledNeed, part.pooledWithin, 0, pooledSize);
    for (let h = 0; h < hours; h += 1) part.someShort[h] += hourShort[h];
    for (let s = 0; s < shifts; s += 1) {
      let short = 0;
      for (let p = pieces.shiftFrom[s]; p < pieces.shiftTo[s]; p += 1) short |= someShort[p];
      part.shiftShort[areas * shifts + s] += short;
      part.shortByReplication[(areas * shifts + s) * rows + row] = short;
    }
  };
}
