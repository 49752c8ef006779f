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
  function scan(before: number, moves: Int32Array, beds: Int32Array): number {
    // Local names: captured ones are looked up again at every store.
    const all = pooled;
    const ends = cuts;
    const pieceCount = count;
    let n = before;
    let short = 0;
    let b = ends[0];
    for (let p = 0; p < pieceCount; p += 1) {
      let most = 0;
      let excess = 0;
      const end = ends[p + 1];
      for (; b < end; b += 1) {
        n = (n + moves[b]) | 0;
        all[b] = (all[b] + n) | 0;
        const over = (n - beds[b]) | 0;
        most = n > most ? n : most;
        if (over > 0) {
          short = (short + over) | 0;
          excess = over > excess ? over : excess;
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
    const need = pooled;
    const beds = pooledBeds;
    for (let p = 0; p < count; p += 1) {
      let excess = 0;
      const end = cuts[p + 1];
      for (let b = cuts[p]; b < end; b += 1) {
        const over = (need[b] - beds[b]) | 0;
        excess = over > excess ? over : excess;
      }
      mostExcess[p] = excess;
      lastNeed[p] = need[end - 1];
    }
  }

  /** Need at the full hour and highest excess within the hour. */
  function addPooledHours(): void {
    const { pooledNeed, pooledWithin } = part;
    for (let h = 0; h < hours; h += 1) {
      const n = lastNeed[pieces.hourTo[h] - 1];
      pooledNeed[h * pooledSize + (n < pooledSize ? n : pooledSize - 1)] += 1;
      pooledWithin[h * width + excessWithin(h)] += 1;
    }
  }

  function excessWithin(h: number): number {
    let excess = 0;
    for (let p = pieces.hourFrom[h]; p < pieces.hourTo[h]; p += 1) if (mostExcess[p] > excess) excess = mostExcess[p];
    return excess < highestExcess ? excess : highestExcess;
  }

  /** Everything that is told by the hour, for one area. */
  function addHours(a: number, trace: ReplicationTrace): void {
    const { need, within, admittedLeaving, arrivalsToAdmit } = part;
    const out = trace.admittedOut[a];
    const come = trace.admittedIn[a];
    const beds = areaBeds[a];
    const { hourTo: lastPiece } = pieces;
    for (let h = 0; h < hours; h += 1) {
      const place = a * hours + h;
      const n = lastNeed[lastPiece[h] - 1];
      need[place * size + (n < size ? n : size - 1)] += 1;
      within[place * width + excessWithin(h)] += 1;
      const leaving = out[h + 1];
      const coming = come[h + 1];
      admittedLeaving[place * flowSize + (leaving < flowSize ? leaving : flowSize - 1)] += 1;
      arrivalsToAdmit[place * flowSize + (coming < flowSize ? coming : flowSize - 1)] += 1;
      const excess = n - beds[hourTo[h] - 1];
      if (excess > 0) addBoarders(place, h, excess, trace.boarderBin[a]);
    }
  }

  /** Fewest of the counted boarders, in their order, whose going would end a shortfall at the full hour. */
  function addBoarders(place: number, h: number, excess: number, boarders: Int32Array): void {
    hourShort[h] = 1;
    const bin = hourTo[h] - 1;
    let needed = 0;
    let gained = 0;
    while (needed < boarders.length && gained < excess) {
      if (boarders[needed] > bin) gained += 1;
      needed += 1;
    }
    part.boardersNeeded[place * boarderSize + (gained < excess ? boarderSize - 1 : needed)] += 1;
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
      addHours(a, trace);
      addShifts(a, row);
    }
    part.bedHoursShort[areas * rows + row] = allShort * hoursPerBin;
    scanPooled();
    addPooledHours();
    for (let h = 0; h < hours; h += 1) part.someShort[h] += hourShort[h];
    for (let s = 0; s < shifts; s += 1) {
      let short = 0;
      for (let p = pieces.shiftFrom[s]; p < pieces.shiftTo[s]; p += 1) short |= someShort[p];
      part.shiftShort[areas * shifts + s] += short;
      part.shortByReplication[(areas * shifts + s) * rows + row] = short;
    }
  };
}
