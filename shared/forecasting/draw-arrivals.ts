import { drawPoisson } from '../stochastic/poisson.ts';
import { purposes } from './need-plan.ts';
import type { NeedChange } from './need-plan.ts';
import {
  binsPerHour,
  departureOf,
  enterArea,
  guideShares,
  leaveArea,
  patientsAtOnce,
  stayOf,
} from './replication-state.ts';
import type { ReplicationState } from './replication-state.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';

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
 * The patients' loop. Given their number, Poisson of the cumulative rate's end, arrival times are independent draws by
 * inversion of the cumulative rate; each comes with a stream by the shares and a stay by the time change. Three words a
 * patient, drawn before the loop.
 */
function arrive(state: ReplicationState, a: number, rate: Float64Array, kept: Kept): void {
  const { trace, stream, change, guide, arrived, words } = state;
  // Local names: this loop is where the time goes, and captured ones cost a look-up each.
  const { spent, shareSteps } = state.stays;
  const { shareBlock, segments, hourOfBin, shareBlocks, bins } = state.plan;
  const { stays, from: lawFrom, last: lawLast, perHazard, end: lawEnd, tail } = state.newcomers;
  const { segmentBin, segmentBins } = state;
  const { moves, admittedIn, admittedOut } = trace;
  const total = cumulateRates(state, rate, state.plan.areas[a].startSegment);
  if (!(total > 0)) return;
  const scale = change.stay;
  const changed = kept !== all || change.closed !== undefined;
  const row = segments + 2;
  const hoursRow = state.plan.hourTo.length + 1;
  const firstStream = a * streamsPerArea;
  const firstMove = a * (bins + 1);
  const pooledMove = state.plan.areas.length * (bins + 1);
  const shareFrom = a * shareBlocks * 3;
  const perWord = total * 2 ** -32;
  const patients = drawPoisson(stream, total);
  let count = 0;
  for (let drawn = 0; drawn < patients; drawn += patientsAtOnce) {
    const end = 3 * Math.min(patientsAtOnce, patients - drawn);
    stream.make(words, end);
    for (let i = 0; i < end; i += 3) {
      const when = words[i];
      const before = (when + 0.5) * perWord;
      let k = guide[when >>> 26];
      while (arrived[k + 1] <= before) k += 1;
      const share = (before - arrived[k]) / (arrived[k + 1] - arrived[k]);
      const u = words[i + 1] * 2 ** -32;
      const steps = shareFrom + shareBlock[k] * 3;
      // Sums of comparisons: which stream it is cannot be foreseen, and a wrong guess of a branch costs more.
      const inArea = +(u >= shareSteps[steps]) + +(u >= shareSteps[steps + 1]) + +(u >= shareSteps[steps + 2]);
      const draw = stream.exponentialFrom(words[i + 2]);
      if (changed && diverted(state, a, inArea, kept, k, share, draw)) continue;
      count += 1;
      const s = firstStream + inArea;
      // As in `stayOf`, `enterArea`, `departureOf` and `leaveArea`, written out.
      const place = draw * perHazard[s];
      const law = lawFrom[s];
      const last = lawLast[s];
      let x: number;
      if (place >= last) x = stays[law + last] + (draw - lawEnd[s]) * tail[s];
      else {
        const index = place | 0;
        const lower = stays[law + index];
        x = lower + (place - index) * (stays[law + index + 1] - lower);
      }
      if (scale !== undefined) x *= scale[s];
      const bin = (segmentBin[k] + share * segmentBins[k]) | 0;
      moves[firstMove + bin] += 1;
      moves[pooledMove + bin] += 1;
      if (inArea === admittedStream) admittedIn[a * hoursRow + hourOfBin[bin]] += 1;
      let at = s * row + k;
      let spentBefore = spent[at];
      let spentAfter = spent[at + 1];
      const target = spentBefore + share * (spentAfter - spentBefore) + x;
      while (spentAfter <= target) {
        at += 1;
        spentBefore = spentAfter;
        spentAfter = spent[at + 1];
      }
      const left = at - s * row;
      const out = (segmentBin[left] + ((target - spentBefore) / (spentAfter - spentBefore)) * segmentBins[left]) | 0;
      moves[firstMove + out] -= 1;
      moves[pooledMove + out] -= 1;
      if (inArea === admittedStream) admittedOut[a * hoursRow + hourOfBin[out]] += 1;
    }
  }
  trace.patients += count;
}

/** Adds up an area's expected arrivals by segment and notes where each of equal shares of them begins. @returns their sum. */
function cumulateRates(state: ReplicationState, rate: Float64Array, startSegment: number): number {
  const { arrived, guide } = state;
  const { segments, segmentAt } = state.plan;
  let total = 0;
  for (let k = startSegment; k < segments; k += 1) {
    arrived[k] = total;
    total += rate[k] * (segmentAt[k + 1] - segmentAt[k]);
  }
  arrived[segments] = total;
  if (!(total > 0)) return 0;
  const share = total / guideShares;
  for (let j = 0, k = startSegment; j < guideShares; j += 1) {
    while (arrived[k + 1] <= j * share) k += 1;
    guide[j] = k;
  }
  return total;
}

/** True for an arrival that a change keeps out of its area; one who goes to another area is placed there. */
function diverted(
  state: ReplicationState,
  a: number,
  inArea: number,
  { fromHours, toHours, keep }: Kept,
  k: number,
  share: number,
  draw: number,
): boolean {
  const { segmentAt } = state.plan;
  const t = segmentAt[k] + share * (segmentAt[k + 1] - segmentAt[k]);
  if (keep < 1 && state.thinning.uniform() >= keep) return true;
  if (t < fromHours || t >= toHours) return true;
  const to = areaOpenAt(state.change.closed, a, t);
  if (to === a) return false;
  if (to !== null) {
    // Same disposition and draw, the other area's stays.
    const s = to * streamsPerArea + inArea;
    const x = stayOf(state.newcomers, s, draw) * (state.change.stay?.[s] ?? 1);
    enterArea(state, to, inArea, Math.floor(t * binsPerHour));
    leaveArea(state, to, inArea, departureOf(state, s, k, share, x));
    state.trace.patients += 1;
  }
  return true;
}

/** Where an arrival goes: the area itself while it is open (its own index), another area, or nowhere. */
function areaOpenAt(closed: NeedChange['closed'], a: number, t: number): number | null {
  for (const { area, fromHours, toHours, to } of closed ?? []) {
    if (area === a && t >= fromHours && t < toHours) return to;
  }
  return a;
}
