import { makeBedHeap } from './bed-heap.ts';
import { QuickStream } from './quick-stream.ts';

/** One area whose bed-space times are known. Everything is constant within a segment. */
export interface WaitingPlan {
  seed: number;
  /** Start of every segment and the end of the last, hours. */
  segmentAt: Float64Array;
  /** Arrivals an hour. */
  ratePerHour: Float64Array;
  beds: Int32Array;
  /** Streams that need a bed space: cumulative shares, and departure hazard an hour from a bed space, [stream][segment]. */
  steps: Float64Array;
  hazardPerHour: Float64Array[];
  /** Hazard of leaving before treatment while waiting, per hour; 0 if nobody does. */
  impatiencePerHour: number;
  /** At the start, in bed spaces by stream, and waiting (first in the queue). */
  inBedSpaces: number[];
  waiting: number;
  /** The site's limit for a wait, hours. */
  waitLimitHours: number;
  /** Sets `ratePerHour` and `hazardPerHour` to a draw of what is unknown about them; null keeps them as they are. */
  redraw: ((replication: number) => void) | null;
  /** Numbers up to which histograms tell; more count as this many. */
  highest: number;
}

/** Sums over replications [from, to), by segment; whole numbers all, so that sums do not depend on the split. */
export interface WaitingPart {
  fromReplication: number;
  toReplication: number;
  size: number;
  /** [segment · size + count]: present, and waiting, at the segment's end. */
  present: Int32Array;
  waiting: Int32Array;
  /** By segment of arrival: arrivals, seconds waited (to a bed space or to leaving), waits over the limit, left before treatment. */
  arrivals: Float64Array;
  secondsWaited: Float64Array;
  overLimit: Float64Array;
  left: Float64Array;
  patients: number;
}

function check(plan: WaitingPlan): void {
  const segments = plan.ratePerHour.length;
  for (let k = 0; k < segments; k += 1) {
    if (!(plan.segmentAt[k + 1] > plan.segmentAt[k])) throw new RangeError(`segmentAt[${k + 1}] must ascend`);
    const rate = plan.ratePerHour[k];
    if (!(rate >= 0 && rate < 1e5)) throw new RangeError(`ratePerHour[${k}] is ${rate}`);
    const beds = plan.beds[k];
    if (!(beds >= 0 && beds <= 1e4)) throw new RangeError(`beds[${k}] is ${beds}`);
    plan.hazardPerHour.forEach((hazard, s) => {
      if (!(hazard[k] >= 0 && hazard[k] < Infinity)) throw new RangeError(`hazardPerHour[${s}][${k}] is ${hazard[k]}`);
    });
  }
  if (!(plan.impatiencePerHour >= 0 && plan.impatiencePerHour < Infinity)) {
    throw new RangeError(`impatiencePerHour is ${plan.impatiencePerHour}`);
  }
  if (!(plan.waitLimitHours >= 0)) throw new RangeError(`waitLimitHours is ${plan.waitLimitHours}`);
  if (!(Number.isInteger(plan.waiting) && plan.waiting >= 0)) throw new RangeError(`waiting is ${plan.waiting}`);
  plan.inBedSpaces.forEach((count, s) => {
    if (!(Number.isInteger(count) && count >= 0)) throw new RangeError(`inBedSpaces[${s}] is ${count}`);
  });
}

/**
 * Simulates waiting for bed spaces, replications [from, to): M_t/M_t/c(t) + M with several streams, first in, first out in
 * order of arrival (less urgent patients in truth wait longer). A stay in a bed space begins when the patient gets one
 * and ends when ∫ hazard reaches the cumulative hazard drawn with the arrival; those whose patience ends first leave and
 * never take a bed space. More beds open at once; a bed to be closed closes when free, or as soon as its patient leaves.
 * The queue is walked patient by patient: the next to be served gets the bed that is free first.
 * @throws RangeError naming a bad rate, hazard or count. Cost: about 0.15 µs a patient.
 */
export function simulateWaitingPart(plan: WaitingPlan, from: number, to: number): WaitingPart {
  check(plan);
  const { segmentAt, ratePerHour, beds, steps, hazardPerHour, impatiencePerHour, highest, waitLimitHours } = plan;
  const segments = ratePerHour.length;
  const streams = hazardPerHour.length;
  const row = segments + 1;
  const spent = new Float64Array(streams * row);
  // Where to look for a sum of hazard: the segment that holds the start of each of so many equal parts of all of it.
  const parts = 2 * segments;
  const holds = new Int32Array(streams * (parts + 1));
  const partsPerHazard = new Float64Array(streams);
  const cumulate = (): void => {
    for (let s = 0; s < streams; s += 1) {
      for (let k = 0; k < segments; k += 1) {
        const more = hazardPerHour[s][k] * (segmentAt[k + 1] - segmentAt[k]);
        spent[s * row + k + 1] = spent[s * row + k] + more;
      }
      const all = spent[s * row + segments];
      partsPerHazard[s] = all > 0 ? parts / all : 0;
      for (let i = 0, k = 0; i <= parts; i += 1) {
        while (k < segments - 1 && spent[s * row + k + 1] * parts <= i * all) k += 1;
        holds[s * (parts + 1) + i] = k;
      }
    }
  };
  cumulate();
  const size = highest + 1;
  const part: WaitingPart = {
    fromReplication: from,
    toReplication: to,
    size,
    present: new Int32Array(segments * size),
    waiting: new Int32Array(segments * size),
    arrivals: new Float64Array(segments),
    secondsWaited: new Float64Array(segments),
    overLimit: new Float64Array(segments),
    left: new Float64Array(segments),
    patients: 0,
  };
  const { arrivals, secondsWaited, overLimit, left } = part;
  const end = segmentAt[segments];
  const presentMoves = new Int32Array(segments + 1);
  const waitingMoves = new Int32Array(segments + 1);
  const heap = makeBedHeap(
    beds.reduce((most, count) => Math.max(most, count), 0) + plan.inBedSpaces.reduce((a, b) => a + b, 0),
  );
  const stream = new QuickStream();
  const none = impatiencePerHour === 0;
  const occupied = plan.inBedSpaces.reduce((sum, count) => sum + count, 0);

  /** End of a stay of cumulative hazard x in stream s, begun at `at` in segment k; fractional segment bookkeeping done. */
  function endOfStay(s: number, k: number, at: number, x: number): number {
    const base = s * row;
    const target = spent[base + k] + hazardPerHour[s][k] * (at - segmentAt[k]) + x;
    if (!(target < spent[base + segments])) {
      presentMoves[segments] -= 1;
      return Infinity;
    }
    const from = holds[s * (parts + 1) + Math.floor(target * partsPerHazard[s])];
    let found = from > k ? from : k;
    // Rounding may have looked one part too late.
    while (found > k && spent[base + found] > target) found -= 1;
    while (spent[base + found + 1] <= target) found += 1;
    presentMoves[found] -= 1;
    return segmentAt[found] + (target - spent[base + found]) / hazardPerHour[s][found];
  }

  for (let replication = from; replication < to; replication += 1) {
    if (plan.redraw !== null) {
      plan.redraw(replication);
      cumulate();
    }
    presentMoves.fill(0);
    waitingMoves.fill(0);
    heap.clear();
    // The next change of beds, and the segment that the last start lay in.
    let nextChange = 1;
    let startSegment = 0;
    let patients = occupied;
    stream.reseed(plan.seed, 1, replication, 0);
    presentMoves[0] += occupied;
    plan.inBedSpaces.forEach((count, s) => {
      for (let i = 0; i < count; i += 1) heap.add(endOfStay(s, 0, segmentAt[0], stream.exponential()));
    });
    for (let i = occupied; i < beds[0]; i += 1) heap.add(segmentAt[0]);
    // More patients in bed spaces than beds: the first to leave take their bed space with them.
    for (let i = beds[0]; i < occupied; i += 1) heap.removeFirst();
    let k = 0;
    let t = segmentAt[0];
    let rate = ratePerHour[0];
    let segmentEnd = segmentAt[1];
    let queue = plan.waiting;
    for (;;) {
      if (queue > 0) queue -= 1;
      else {
        let gap = stream.exponential();
        let room = rate * (segmentEnd - t);
        while (gap >= room) {
          gap -= room;
          k += 1;
          if (k === segments) break;
          t = segmentEnd;
          rate = ratePerHour[k];
          segmentEnd = segmentAt[k + 1];
          room = rate * (segmentEnd - t);
        }
        if (k === segments) break;
        t += gap / rate;
      }
      let s = 0;
      if (streams > 1) {
        const u = stream.uniform();
        while (s < streams - 1 && u >= steps[s]) s += 1;
      }
      const x = stream.exponential();
      const patience = none ? Infinity : stream.exponential() / impatiencePerHour;
      patients += 1;
      presentMoves[k] += 1;
      arrivals[k] += 1;
      // When the patient gets a bed: changes of beds up to then are made first. All of it stands here in the loop and not in
      // functions of its own, which would look up anew for every patient what the loop holds in registers: a fifth of the time.
      let at: number;
      for (;;) {
        const free = heap.size() > 0 ? heap.first() : Infinity;
        at = free > t ? free : t;
        if (nextChange >= segments || segmentAt[nextChange] > at) break;
        const change = beds[nextChange] - beds[nextChange - 1];
        for (let i = 0; i < change; i += 1) heap.add(segmentAt[nextChange]);
        for (let i = 0; i > change; i -= 1) heap.removeFirst();
        nextChange += 1;
      }
      if (at - t > patience || at >= end) {
        const gone = Math.min(t + patience, end);
        let found = k;
        while (found < segments && segmentAt[found + 1] <= gone) found += 1;
        waitingMoves[k] += 1;
        waitingMoves[found] -= 1;
        presentMoves[found] -= 1;
        if (gone < end) left[k] += 1;
        secondsWaited[k] += Math.round((gone - t) * 3600);
        if (gone - t > waitLimitHours) overLimit[k] += 1;
        continue;
      }
      if (at > t) {
        secondsWaited[k] += Math.round((at - t) * 3600);
        if (at - t > waitLimitHours) overLimit[k] += 1;
        while (segmentAt[startSegment + 1] <= at) startSegment += 1;
        waitingMoves[k] += 1;
        waitingMoves[startSegment] -= 1;
      } else startSegment = k;
      heap.replaceFirst(endOfStay(s, startSegment, at, x));
    }
    part.patients += patients;
    let present = 0;
    let waiting = 0;
    for (let h = 0; h < segments; h += 1) {
      present += presentMoves[h];
      waiting += waitingMoves[h];
      part.present[h * size + (present < highest ? present : highest)] += 1;
      part.waiting[h * size + (waiting < highest ? waiting : highest)] += 1;
    }
  }
  return part;
}
