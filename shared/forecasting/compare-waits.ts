import { bedsAt } from '../domain/bed-schedule.ts';
import { withOwnEnds } from '../domain/in-charge-spans.ts';
import { bedWindows, changedBeds, type PlanChange } from '../domain/plan-change.ts';
import type { PairedSums } from './compare-need.ts';
import type { NeedChange } from './need-plan.ts';
import type { OutlookInput } from './outlook-types.ts';
import type { OutlookModel } from './prepare-need.ts';
import { needChangeOf } from './scenario.ts';
import { streamsPerArea } from './stay-model.ts';
import { prepareWaiting, prepareWaitingGround, segmentsWithin, type WaitingChange } from './waiting-outlook.ts';
import { simulateWaitingPart, type WaitingPlan } from './waiting-simulation.ts';

/** One area's waits as they are and with the plan, on the same draws; null where its bed-space times are not loaded. */
type WaitingPair = { asIs: WaitingPlan; changed: WaitingPlan } | null;

/** What a comparison of waits stands on; made once a thread. */
export interface PreparedWaits {
  limitMinutes: number;
  pairs: WaitingPair[];
  /** Segments of each shift's arrivals. */
  within: number[][];
}

/** What a plan says of one area's arrivals and stays. @param middle hours since the outlook, of each segment */
function waitingChange(change: NeedChange, area: number, middle: readonly number[]): WaitingChange {
  const { demand, surge = [], closed = [], stay } = change;
  const holds = (one: { fromHours: number; toHours: number }, k: number): boolean =>
    one.fromHours <= middle[k] && middle[k] < one.toHours;
  const wanted = (rates: readonly Float64Array[], a: number, k: number): number => rates[a][k] * (demand?.[a] ?? 1);
  return {
    rate: (rates, k) => {
      const open = !closed.some((one) => one.area === area && holds(one, k));
      const own = open ? wanted(rates, area, k) : 0;
      const extra = surge.reduce((sum, one) => (one.area === area && holds(one, k) ? sum + one.ratePerHour : sum), 0);
      const sent = closed.reduce(
        (sum, one) => (one.to === area && holds(one, k) ? sum + wanted(rates, one.area, k) : sum),
        0,
      );
      return own + extra + sent;
    },
    stay: [0, 1, 2].map((s) => stay?.[area * streamsPerArea + s] ?? 1),
  };
}

/**
 * Makes ready to compare waits against the site's limit, as is and with a plan's changes of beds, arrivals, stays, surges and
 * closures. Boarding patients whom a plan sees out earlier are not taken out of these waits, which are then too long if anything.
 * @returns null where the site has stated no limit
 */
export function prepareWaits(
  model: OutlookModel,
  input: OutlookInput,
  changes: readonly PlanChange[],
): PreparedWaits | null {
  const limitMinutes = input.waitLimitMinutes ?? null;
  if (limitMinutes === null) return null;
  const { issuedAt } = input;
  const spans = withOwnEnds(input.shifts, issuedAt);
  const edges = changes.flatMap((one) => ('from' in one ? [one.from, one.to] : []));
  const ground = prepareWaitingGround(model, input, [...spans.flatMap(({ from, to }) => [from, to]), ...edges]);
  const change = needChangeOf(
    changes.filter(({ kind }) => kind !== 'beds'),
    { startAt: issuedAt, bins: 0, areas: input.areas },
  );
  const hour = (at: number): number => (at - issuedAt) / 3600;
  const middle = Array.from(ground.grid.startAt, (at, k) => hour(at) + ground.grid.hours[k] / 2);
  const pairs = input.areas.map(({ areaId, staffedBeds }, a): WaitingPair => {
    const asIs = prepareWaiting(ground, a, limitMinutes / 60);
    const other = prepareWaiting(ground, a, limitMinutes / 60, waitingChange(change, a, middle));
    if (asIs === null || other === null) return null;
    const steps = changedBeds(staffedBeds, bedWindows(changes, areaId));
    const beds = Int32Array.from(ground.grid.startAt, (at) => Math.max(0, bedsAt(steps, at)));
    return { asIs: { ...asIs, highest: 1 }, changed: { ...other, beds, highest: 1 } };
  });
  const segmentAt = Float64Array.from([...ground.grid.startAt, input.hours[input.hours.length - 1]], hour);
  return {
    limitMinutes,
    pairs,
    within: spans.map(({ from, to }) => segmentsWithin({ segmentAt }, hour(from), hour(to))),
  };
}

/**
 * Patients who wait longer than the limit, by area and shift of arrival, [row · shifts + shift] and the sum of the areas last:
 * each replication once as it is and once with the plan, on the same random numbers.
 */
export function compareWaitsPart({ pairs, within }: PreparedWaits, from: number, to: number): PairedSums {
  const shifts = within.length;
  const cells = (pairs.length + 1) * shifts;
  const sums: PairedSums = {
    unit: 1,
    asIs: new Float64Array(cells),
    changed: new Float64Array(cells),
    squares: new Float64Array(cells),
  };
  const over = (plan: WaitingPlan, replication: number): number[] => {
    const { overLimit } = simulateWaitingPart(plan, replication, replication + 1);
    return within.map((segments) => segments.reduce((sum, k) => sum + overLimit[k], 0));
  };
  const add = (row: number, before: readonly number[], after: readonly number[]): void => {
    before.forEach((count, s) => {
      const cell = row * shifts + s;
      sums.asIs[cell] += count;
      sums.changed[cell] += after[s];
      sums.squares[cell] += (after[s] - count) ** 2;
    });
  };
  for (let replication = from; replication < to; replication += 1) {
    const [before, after] = [new Array<number>(shifts).fill(0), new Array<number>(shifts).fill(0)];
    pairs.forEach((pair, a) => {
      if (pair === null) return;
      const asIs = over(pair.asIs, replication);
      const changed = over(pair.changed, replication);
      add(a, asIs, changed);
      asIs.forEach((count, s) => {
        before[s] += count;
        after[s] += changed[s];
      });
    });
    add(pairs.length, before, after);
  }
  return sums;
}
