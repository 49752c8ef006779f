import { highestExcess } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import { cutPieces } from './need-pieces.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';

/** One replication: what came and went. */
export interface ReplicationTrace {
  patients: number;
  /** Arrivals minus departures: [area · (bins + 1) + bin], the department in the last row; entry `bins` gathers what is past the end and is never read. */
  moves: Int32Array;
  /** Admitted patients who leave, and arrivals who will be admitted, by `hourOfBin` of the plan (0: outside the hours): [area · (hours + 1) + hour]. */
  admittedOut: Int32Array;
  admittedIn: Int32Array;
  /** Bin in which each counted boarder leaves, per area; beyond the last bin if later. */
  boarderBin: Int32Array[];
}

const hoursPerBin = binSeconds / 3600;

/**
 * Makes the function that adds one replication to a part; `row` is its place within the part. Buffers are its own.
 * Cost of a call: one pass over the bins of every area, about 2 ns a bin.
 */
export function makeNeedRecorder(
  plan: NeedPlan,
  part: NeedPart,
  change?: NeedChange,
): (trace: ReplicationTrace, row: number) => void {
  const { areas, hours, shifts, size, pooledSize, boarderSize, flowSize } = part;
  const rows = part.toReplication - part.fromReplication;
  const binBeds = plan.areas.map((area, a) => change?.beds?.[a] ?? area.beds);
  const pieces = cutPieces(plan, binBeds);
  const { cuts, count, hourTo, shiftFrom, shiftTo, nightTo } = pieces;
  const beds = binBeds.map((own) => Int32Array.from({ length: count }, (_, p) => own[cuts[p]]));
  const hourBeds = binBeds.map((own) => Int32Array.from(plan.hourTo, (bin) => own[bin - 1]));
  const pooledBeds = Int32Array.from({ length: count }, (_, p) => beds.reduce((sum, own) => sum + own[p], 0));
  const mostNeed = new Int32Array(count);
  const someShort = new Uint8Array(count);
  const hourShort = new Uint8Array(hours);
  const width = highestExcess + 1;

  /** One area: need by hour, flows and the night's peak; highest need of every piece for the shifts. @returns bins short. */
  function addArea(a: number, trace: ReplicationTrace): number {
    // Local names: captured ones are looked up again at every store.
    const { moves, admittedOut, admittedIn } = trace;
    const { need, within, admittedLeaving, arrivalsToAdmit } = part;
    const ends = cuts;
    const most = mostNeed;
    const ownBeds = beds[a];
    const pieceTo = hourTo;
    const atHour = hourBeds[a];
    const first = a * (plan.bins + 1);
    const firstHour = a * (hours + 1) + 1;
    const hourCount = hours;
    const needSize = size;
    const flowRoom = flowSize;
    let n = 0;
    let b = 0;
    for (; b < ends[0]; b += 1) n = (n + moves[first + b]) | 0;
    let short = 0;
    let peak = 0;
    let p = 0;
    for (let h = 0; h < hourCount; h += 1) {
      let excess = 0;
      const last = pieceTo[h];
      for (; p < last; p += 1) {
        const end = ends[p + 1];
        const from = b;
        const before = n;
        let highest = 0;
        // Four bins a turn: the loop itself would cost as much as what it does.
        for (; b + 3 < end; b += 4) {
          const one = (n + moves[first + b]) | 0;
          const two = (one + moves[first + b + 1]) | 0;
          const three = (two + moves[first + b + 2]) | 0;
          n = (three + moves[first + b + 3]) | 0;
          if (one > highest) highest = one;
          if (two > highest) highest = two;
          if (three > highest) highest = three;
          if (n > highest) highest = n;
        }
        for (; b < end; b += 1) {
          n = (n + moves[first + b]) | 0;
          if (n > highest) highest = n;
        }
        most[p] = highest;
        if (p < nightTo && highest > peak) peak = highest;
        const over = (highest - ownBeds[p]) | 0;
        if (over > 0) {
          if (over > excess) excess = over;
          someShort[p] = 1;
          short += binsShort(moves, first + from, first + end, before, ownBeds[p]);
        }
      }
      const place = a * hourCount + h;
      need[place * needSize + (n < needSize ? n : needSize - 1)] += 1;
      within[place * width + (excess < highestExcess ? excess : highestExcess)] += 1;
      const out = admittedOut[firstHour + h];
      const come = admittedIn[firstHour + h];
      admittedLeaving[place * flowRoom + (out < flowRoom ? out : flowRoom - 1)] += 1;
      arrivalsToAdmit[place * flowRoom + (come < flowRoom ? come : flowRoom - 1)] += 1;
      if (n > atHour[h]) addBoarders(place, h, n - atHour[h], trace.boarderBin[a]);
    }
    part.peak[a * size + (peak < size ? peak : size - 1)] += 1;
    return short;
  }

  /** Sum over bins of what need exceeds beds by: only where it does at all. */
  function binsShort(moves: Int32Array, from: number, to: number, before: number, bedsThere: number): number {
    let n = before;
    let short = 0;
    for (let b = from; b < to; b += 1) {
      n += moves[b];
      if (n > bedsThere) short += n - bedsThere;
    }
    return short;
  }

  /** The department as a whole: need at the full hour and highest excess within the hour. */
  function addPooledHours({ moves }: ReplicationTrace): void {
    const { pooledNeed, pooledWithin } = part;
    const ends = cuts;
    const pieceTo = hourTo;
    const bedsThere = pooledBeds;
    const first = areas * (plan.bins + 1);
    let n = 0;
    let b = 0;
    for (; b < ends[0]; b += 1) n = (n + moves[first + b]) | 0;
    let p = 0;
    for (let h = 0; h < hours; h += 1) {
      let excess = 0;
      for (; p < pieceTo[h]; p += 1) {
        let highest = 0;
        for (const end = ends[p + 1]; b < end; b += 1) {
          n = (n + moves[first + b]) | 0;
          if (n > highest) highest = n;
        }
        if (highest - bedsThere[p] > excess) excess = highest - bedsThere[p];
      }
      pooledNeed[h * pooledSize + (n < pooledSize ? n : pooledSize - 1)] += 1;
      pooledWithin[h * width + (excess < highestExcess ? excess : highestExcess)] += 1;
    }
  }

  /** Fewest of the counted boarders, in their order, whose going would end a shortfall at the full hour. */
  function addBoarders(place: number, h: number, excess: number, boarders: Int32Array): void {
    hourShort[h] = 1;
    const bin = plan.hourTo[h] - 1;
    let needed = 0;
    let gained = 0;
    while (needed < boarders.length && gained < excess) {
      if (boarders[needed] > bin) gained += 1;
      needed += 1;
    }
    part.boardersNeeded[place * boarderSize + (gained < excess ? boarderSize - 1 : needed)] += 1;
  }

  function addShifts(a: number, row: number): void {
    const most = mostNeed;
    const ownBeds = beds[a];
    for (let s = 0; s < shifts; s += 1) {
      let highest = 0;
      let short = 0;
      for (let p = shiftFrom[s]; p < shiftTo[s]; p += 1) {
        if (most[p] > highest) highest = most[p];
        if (most[p] > ownBeds[p]) short = 1;
      }
      part.shiftPeak[(a * shifts + s) * size + (highest < size ? highest : size - 1)] += 1;
      part.shiftShort[a * shifts + s] += short;
      part.shortByReplication[(a * shifts + s) * rows + row] = short;
    }
  }

  return (trace, row) => {
    someShort.fill(0);
    hourShort.fill(0);
    let allShort = 0;
    for (let a = 0; a < areas; a += 1) {
      const short = addArea(a, trace);
      part.bedHoursShort[a * rows + row] = short * hoursPerBin;
      allShort += short;
      addShifts(a, row);
    }
    part.bedHoursShort[areas * rows + row] = allShort * hoursPerBin;
    addPooledHours(trace);
    for (let h = 0; h < hours; h += 1) part.someShort[h] += hourShort[h];
    for (let s = 0; s < shifts; s += 1) {
      let short = 0;
      for (let p = shiftFrom[s]; p < shiftTo[s]; p += 1) short |= someShort[p];
      part.shiftShort[areas * shifts + s] += short;
      part.shortByReplication[(areas * shifts + s) * rows + row] = short;
    }
  };
}
