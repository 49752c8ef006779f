import { drawPoisson } from '../stochastic/poisson.ts';
import { purposes } from './need-plan.ts';
import type { NeedChange } from './need-plan.ts';
import {
  cumulateRates,
  drawBatch,
  endStays,
  passIntoBoarding,
  patientsAtOnce,
  postComing,
  postLeaving,
} from './patient-loops.ts';
import { binsPerHour, enterArea, lastDeparture, leaveArea } from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { streamsPerArea } from './stay-model.ts';

/** Which arrivals count: within these hours, and the share kept, below 1 by a uniform that each carries. */
interface Kept {
  fromHours: number;
  toHours: number;
  keep: number;
}

const all: Kept = { fromHours: 0, toHours: Infinity, keep: 1 };

/**
 * Draws the arrivals of every area, changes tried included, with their streams and stays. Every kind of extra arrival has
 * a substream of its own, so that the arrivals "as is" stay the same to the digit.
 */
export function drawArrivals(state: ReplicationState, replication: number, changedRate: Float64Array): void {
  const { plan, change, stream, rates } = state;
  const { seed, segments, segmentAt } = plan;
  for (let a = 0; a < plan.areas.length; a += 1) {
    const demand = change.demand?.[a] ?? 1;
    stream.reseed(seed, purposes.arrivals, replication, a);
    if (demand < 1) state.thinning.reseed(seed, purposes.thinning, replication, a);
    arrive(state, a, rates[a], demand < 1 ? { ...all, keep: demand } : all);
    if (demand > 1) {
      stream.reseed(seed, purposes.extra, replication, a);
      for (let k = 0; k < segments; k += 1) changedRate[k] = rates[a][k] * (demand - 1);
      arrive(state, a, changedRate, all);
    }
  }
  change.surge?.forEach(({ area, fromHours, toHours, ratePerHour }, i) => {
    stream.reseed(seed, purposes.surge, replication, i);
    for (let k = 0; k < segments; k += 1) {
      changedRate[k] = segmentAt[k] < toHours && segmentAt[k + 1] > fromHours ? ratePerHour : 0;
    }
    arrive(state, area, changedRate, { fromHours, toHours, keep: 1 });
  });
}

/**
 * Draws one area's arrivals. Given their number, Poisson of the cumulative rate's end, arrival times are independent draws
 * by inversion of the cumulative rate; each comes with a stream by the shares and a stay by the time change.
 */
function arrive(state: ReplicationState, a: number, rate: Float64Array, kept: Kept): void {
  const { plan, stream, change } = state;
  const { segments } = plan;
  // Lengths are in bins there.
  const total = cumulateRates(rate, plan.areas[a].startSegment, segments);
  if (!(total > 0)) return;
  const firstStream = a * streamsPerArea;
  const changed = kept !== all || change.closed !== undefined;
  const patients = drawPoisson(stream, total / binsPerHour);
  for (let drawn = 0; drawn < patients; drawn += patientsAtOnce) {
    let count = Math.min(patientsAtOnce, patients - drawn);
    drawBatch(stream, count, total, a * plan.shareBlocks * 3, state.stages);
    if (changed) count = divert(state, a, count, kept);
    endStays(count, firstStream, firstStream, segments + 2);
    postComing(count, a, state.sizes);
    if (plan.areas[a].staged) {
      endStays(passIntoBoarding(count, plan.bins), firstStream, firstStream, segments + 2);
    }
    postLeaving(count, a, state.sizes);
    state.trace.patients += count;
  }
}

/** Takes out of the batch whom a change keeps out of the area; those who go to another are placed there. @returns how many are left. */
function divert(state: ReplicationState, a: number, count: number, { fromHours, toHours, keep }: Kept): number {
  const { batch, thinning, trace } = state;
  const { segmentAt } = state.plan;
  const { segment, share, inArea, stay, boardingStay } = batch;
  let kept = 0;
  for (let i = 0; i < count; i += 1) {
    const k = segment[i];
    const t = segmentAt[k] + share[i] * (segmentAt[k + 1] - segmentAt[k]);
    if (keep < 1 && thinning.uniform() >= keep) continue;
    if (t < fromHours || t >= toHours) continue;
    const to = areaOpenAt(state.change.closed, a, t);
    if (to === null) continue;
    if (to === a) {
      segment[kept] = k;
      share[kept] = share[i];
      inArea[kept] = inArea[i];
      stay[kept] = stay[i];
      boardingStay[kept] = boardingStay[i];
      kept += 1;
      continue;
    }
    // Same disposition and draws, the other area's stays.
    enterArea(state, to, inArea[i], Math.floor(t * binsPerHour));
    leaveArea(state, to, inArea[i], lastDeparture(state, to, inArea[i], k, share[i], stay[i], boardingStay[i]));
    trace.patients += 1;
  }
  return kept;
}

/** Where an arrival goes: the area itself while it is open (its own index), another area, or nowhere. */
function areaOpenAt(closed: NeedChange['closed'], a: number, t: number): number | null {
  for (const { area, fromHours, toHours, to } of closed ?? []) {
    if (area === a && t >= fromHours && t < toHours) return to;
  }
  return a;
}
