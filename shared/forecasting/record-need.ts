import { highestExcess } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import { cutPieces } from './need-pieces.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';
import { pieces as pieceRoom, scanNeed } from './patient-loops.ts';

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
 * Makes the function that adds one replication to a part; `row` is its place within the part. The trace is that of the
 * plan's state: its moves lie in the memory of the patients' loops, and so does what this works with.
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
  const { bins } = plan;
  const mostNeed = pieceRoom.most;
  const lastNeed = pieceRoom.last;
  const beds = binBeds.map((own) => Int32Array.from({ length: count }, (_, p) => own[cuts[p]]));
  const pooledBeds = Int32Array.from({ length: count }, (_, p) => beds.reduce((sum, own) => sum + own[p], 0));
  const hourExcess = new Int32Array(hours);
  const hourOfPiece = new Uint16Array(count);
  for (let h = hours - 1; h >= 0; h -= 1) hourOfPiece.fill(h, 0, hourTo[h]);
  const someShort = new Uint8Array(count);
  const hourShort = new Uint8Array(hours);
  const width = highestExcess + 1;

  /** Highest excess over beds within every hour, from that of its pieces; true where some piece is short. */
  function scanExcess(bedsThere: Int32Array): boolean {
    const most = mostNeed;
    const excess = hourExcess;
    const hourAt = hourOfPiece;
    let some = 0;
    excess.fill(0);
    for (let p = 0; p < count; p += 1) {
      const over = (most[p] - bedsThere[p]) | 0;
      if (over > excess[hourAt[p]]) {
        excess[hourAt[p]] = over;
        some = 1;
      }
    }
    return some === 1;
  }

  /** One area: need by hour, flows and the night's peak; highest need of every piece for the shifts. @returns bins short. */
  function addArea(a: number, trace: ReplicationTrace): number {
    scanNeed(a, bins, count);
    const some = scanExcess(beds[a]);
    addHours(a, trace);
    const most = mostNeed;
    let peak = 0;
    for (let p = 0; p < nightTo; p += 1) if (most[p] > peak) peak = most[p];
    part.peak[a * size + (peak < size ? peak : size - 1)] += 1;
    return some ? addShort(a, trace) : 0;
  }

  function addHours(a: number, { admittedOut, admittedIn }: ReplicationTrace): void {
    const { need, within, admittedLeaving, arrivalsToAdmit } = part;
    const excess = hourExcess;
    const atEnd = lastNeed;
    const pieceTo = hourTo;
    const needSize = size;
    const flowRoom = flowSize;
    const hourCount = hours;
    const firstHour = a * (hourCount + 1) + 1;
    for (let h = 0, place = a * hourCount; h < hourCount; h += 1, place += 1) {
      const n = atEnd[pieceTo[h] - 1];
      const over = excess[h];
      const out = admittedOut[firstHour + h];
      const come = admittedIn[firstHour + h];
      need[place * needSize + (n < needSize ? n : needSize - 1)] += 1;
      within[place * width + (over < highestExcess ? over : highestExcess)] += 1;
      admittedLeaving[place * flowRoom + (out < flowRoom ? out : flowRoom - 1)] += 1;
      arrivalsToAdmit[place * flowRoom + (come < flowRoom ? come : flowRoom - 1)] += 1;
    }
  }

  /** Of an area that is short somewhere: where, by how much, and what boarders could do about it. @returns bins short. */
  function addShort(a: number, { moves, boarderBin }: ReplicationTrace): number {
    const first = a * (plan.bins + 1);
    let short = 0;
    for (let p = 0; p < count; p += 1) {
      if (mostNeed[p] <= beds[a][p]) continue;
      someShort[p] = 1;
      short += binsShort(moves, first + cuts[p], first + cuts[p + 1], lastNeed[p], beds[a][p]);
    }
    const { wholeHour } = plan.areas[a];
    for (let h = 0; h < hours; h += 1) {
      // Nowhere within the hour is need above the beds.
      if (hourExcess[h] === 0) continue;
      const last = plan.hourTo[h] - 1;
      let n = lastNeed[hourTo[h] - 1];
      let needed = 0;
      for (let b = last; b >= (wholeHour ? plan.hourFrom[h] : last); b -= 1) {
        if (n > binBeds[a][b]) needed = Math.max(needed, boardersFor(n - binBeds[a][b], b, boarderBin[a]));
        n -= moves[first + b];
      }
      if (needed > 0) part.boardersNeeded[(a * hours + h) * boarderSize + needed] += 1;
      if (lastNeed[hourTo[h] - 1] > binBeds[a][last]) hourShort[h] = 1;
    }
    return short;
  }

  /** Sum over bins of what need exceeds beds by, backwards from the need at the end. */
  function binsShort(moves: Int32Array, from: number, to: number, atEnd: number, bedsThere: number): number {
    let n = atEnd;
    let short = 0;
    for (let b = to - 1; b >= from; b -= 1) {
      if (n > bedsThere) short += n - bedsThere;
      n -= moves[b];
    }
    return short;
  }

  /** The department as a whole: need at the full hour and highest excess within the hour. */
  function addPooled(): void {
    const { pooledNeed, pooledWithin } = part;
    scanNeed(areas, bins, count);
    scanExcess(pooledBeds);
    const excess = hourExcess;
    const atEnd = lastNeed;
    const pieceTo = hourTo;
    for (let h = 0; h < hours; h += 1) {
      const n = atEnd[pieceTo[h] - 1];
      const over = excess[h];
      pooledNeed[h * pooledSize + (n < pooledSize ? n : pooledSize - 1)] += 1;
      pooledWithin[h * width + (over < highestExcess ? over : highestExcess)] += 1;
    }
  }

  /** Fewest of the counted boarders, in their order, whose going would end an excess in a bin; the last entry when not even all of them. */
  function boardersFor(excess: number, bin: number, boarders: Int32Array): number {
    let needed = 0;
    let gained = 0;
    while (needed < boarders.length && gained < excess) {
      if (boarders[needed] > bin) gained += 1;
      needed += 1;
    }
    return gained < excess ? boarderSize - 1 : needed;
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

  pieceRoom.end.set(cuts);
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
    addPooled();
    for (let h = 0; h < hours; h += 1) part.someShort[h] += hourShort[h];
    for (let s = 0; s < shifts; s += 1) {
      let short = 0;
      for (let p = shiftFrom[s]; p < shiftTo[s]; p += 1) short |= someShort[p];
      part.shiftShort[areas * shifts + s] += short;
      part.shortByReplication[(areas * shifts + s) * rows + row] = short;
    }
  };
}
