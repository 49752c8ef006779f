import { purposes } from './need-plan.ts';
import { binsPerHour, departureOf, leaveArea } from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';
import { stayAt } from './stay-shape.ts';

/** How arrivals of one area are drawn. */
interface ArrivalDraw {
  a: number;
  rate: Float64Array;
  /** Only arrivals within these hours count; the others are drawn and dropped. */
  fromHours: number;
  toHours: number;
  /** Share kept: below 1 each arrival carries a uniform that decides. */
  keep: number;
}

/**
 * Draws the arrivals of every area, changes tried included, with their streams and stays. Every kind of extra arrival has
 * a substream of its own, so that the arrivals "as is" stay the same to the digit.
 */
export function drawArrivals(state: ReplicationState, replication: number, changedRate: Float64Array): void {
  const { plan, change, stream, rates } = state;
  const { seed, segments, segmentAt } = plan;
  const whole = { fromHours: 0, toHours: Infinity };
  for (let a = 0; a < plan.areas.length; a += 1) {
    const demand = change.demand?.[a] ?? 1;
    stream.reseed(seed, purposes.arrivals, replication, a);
    if (demand < 1) state.thinning.reseed(seed, purposes.thinning, replication, a);
    arrive(state, { a, rate: rates[a], keep: Math.min(1, demand), ...whole });
    if (demand > 1) {
      stream.reseed(seed, purposes.extra, replication, a);
      for (let k = 0; k < segments; k += 1) changedRate[k] = rates[a][k] * (demand - 1);
      arrive(state, { a, rate: changedRate, keep: 1, ...whole });
    }
  }
  change.surge?.forEach(({ area, fromHours, toHours, ratePerHour }, i) => {
    stream.reseed(seed, purposes.surge, replication, i);
    for (let k = 0; k < segments; k += 1) {
      changedRate[k] = segmentAt[k] < toHours && segmentAt[k + 1] > fromHours ? ratePerHour : 0;
    }
    arrive(state, { a: area, rate: changedRate, keep: 1, fromHours, toHours });
  });
}

/** The patients' loop: piecewise inversion of unit-exponential gaps, a stream by the shares, a stay by the time change. */
function arrive(state: ReplicationState, { a, rate, fromHours, toHours, keep }: ArrivalDraw): void {
  const { trace, stream, thinning, spent, change } = state;
  // Local names: this loop is where the time goes, and captured ones cost a look-up each.
  const { hazard, shareSteps } = state.stays;
  const { segmentAt, shareBlock, segments, hourOfBin, shareBlocks } = state.plan;
  const { shapes, startSegment, startHours } = state.plan.areas[a];
  const moves = trace.moves[a];
  const admittedIn = trace.admittedIn[a];
  const admittedOut = trace.admittedOut[a];
  const scale = change.stay;
  const closed = change.closed?.filter((one) => one.area === a) ?? [];
  const row = segments + 1;
  const firstStream = a * streamsPerArea;
  const shareFrom = a * shareBlocks * 3;
  const thinned = keep < 1;
  const windowed = fromHours > 0 || toHours < Infinity;
  let k = startSegment;
  let t = startHours;
  let count = 0;
  for (;;) {
    let gap = stream.exponential();
    let room = rate[k] * (segmentAt[k + 1] - t);
    while (gap >= room) {
      gap -= room;
      k += 1;
      if (k === segments) {
        trace.patients += count;
        return;
      }
      t = segmentAt[k];
      room = rate[k] * (segmentAt[k + 1] - t);
    }
    t += gap / rate[k];
    const u = stream.uniform();
    const share = shareFrom + shareBlock[k] * 3;
    const inArea = u < shareSteps[share] ? 0 : u < shareSteps[share + 1] ? 1 : u < shareSteps[share + 2] ? 2 : 3;
    const draw = stream.exponential();
    if (thinned && thinning.uniform() >= keep) continue;
    if (windowed && (t < fromHours || t >= toHours)) continue;
    if (closed.length > 0) {
      const to = divertedTo(closed, t);
      if (to !== a) {
        if (to !== null) arriveElsewhere(state, to, inArea, k, t, draw);
        continue;
      }
    }
    count += 1;
    const shape = shapes[inArea];
    let x = shape === null ? draw : stayAt(shape, draw);
    const s = firstStream + inArea;
    if (scale !== undefined) x *= scale[s];
    const bin = Math.floor(t * binsPerHour);
    moves[bin] += 1;
    if (inArea === admittedStream) admittedIn[hourOfBin[bin]] += 1;
    // As in `departureOf` and `leaveArea`, written out.
    const base = s * row;
    const target = spent[base + k] + hazard[s * segments + k] * (t - segmentAt[k]) + x;
    if (target < spent[base + segments]) {
      let at = k;
      while (spent[base + at + 1] <= target) at += 1;
      const out = Math.floor((segmentAt[at] + (target - spent[base + at]) / hazard[s * segments + at]) * binsPerHour);
      moves[out] -= 1;
      if (inArea === admittedStream) admittedOut[hourOfBin[out]] += 1;
    }
  }
}

/** Where an arrival goes: the area itself while it is open (its own index), another area, or nowhere. */
function divertedTo(
  closed: readonly { area: number; fromHours: number; toHours: number; to: number | null }[],
  t: number,
): number | null {
  for (const { area, fromHours, toHours, to } of closed) {
    if (t >= fromHours && t < toHours) return to;
    if (t < fromHours) return area;
  }
  return closed[0].area;
}

/** A patient of a closed area in another one: same disposition and draw, the other area's stays. */
function arriveElsewhere(state: ReplicationState, a: number, inArea: number, k: number, t: number, draw: number): void {
  const { plan, trace } = state;
  const s = a * streamsPerArea + inArea;
  const shape = plan.areas[a].shapes[inArea];
  const x = (shape === null ? draw : stayAt(shape, draw)) * (state.change.stay?.[s] ?? 1);
  const bin = Math.floor(t * binsPerHour);
  trace.moves[a][bin] += 1;
  trace.patients += 1;
  if (inArea === admittedStream) trace.admittedIn[a][plan.hourOfBin[bin]] += 1;
  leaveArea(state, a, inArea, departureOf(state, s, k, t, x));
}
