import { withOwnEnds } from '../domain/in-charge-spans.ts';
import type { PlanChange } from '../domain/plan-change.ts';
import { comparePart, mergeCompared, pairedDifference } from './compare-need.ts';
import type { ComparedPart, PairedSums } from './compare-need.ts';
import { engineVersion } from './engine-version.ts';
import { compareWaitsPart, prepareWaits, type PreparedWaits } from './compare-waits.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';
import type { OutlookInput, OutlookResult } from './outlook-types.ts';
import { prepareNeed } from './prepare-need.ts';
import type { OutlookModel } from './prepare-need.ts';
import { needChangeOf } from './scenario.ts';
import { simulateNeedPart } from './simulate-need.ts';

/** A figure as it is and with the plan, and the difference, plan minus as is, with its 95 % interval. */
export interface ComparedFigure {
  asIs: number;
  plan: number;
  difference: number;
  low: number;
  high: number;
}

/** One area, or the whole department. */
export interface ComparedRow {
  /** Null: the department, where "some area is short" and bed-hours of all areas are compared. */
  areaId: string | null;
  /** Chance of any shortfall during each shift (for the one under way, what is left of it). */
  shifts: ComparedFigure[];
  /** Bed-hours short until the last hour, on average. */
  bedHoursShort: ComparedFigure;
  /** Patients of each shift who wait longer than the site's limit, on average; null where no bed-space times are loaded or no limit is stated, absent before it was told. */
  waits?: ComparedFigure[] | null;
  /** Chance of shortfall at each full hour; empty for the department. */
  hours: { asIs: number[]; plan: number[] };
}

/** A plan against as is, by simulation with common random numbers. */
export interface ScenarioResult {
  engineVersion: string;
  replications: number;
  seed: number;
  lengthOfStay: OutlookResult['lengthOfStay'];
  hours: number[];
  shifts: { name: string; from: number; to: number }[];
  /** The site's limit for a wait; null where it has stated none. */
  waitLimitMinutes?: number | null;
  rows: ComparedRow[];
}

/** What the parts of a comparison stand on; made once a thread. */
export interface PreparedScenario {
  input: OutlookInput;
  plan: NeedPlan;
  change: NeedChange;
  waits: PreparedWaits | null;
  lengthOfStay: OutlookResult['lengthOfStay'];
}

/** Makes ready for comparing. @throws RangeError naming a bad input or change. */
export function prepareScenario(
  model: OutlookModel,
  input: OutlookInput,
  changes: readonly PlanChange[],
): PreparedScenario {
  // A shift's chance is that of its own half hours, as on Week ahead.
  const own = { ...input, shifts: withOwnEnds(input.shifts, input.issuedAt) };
  const { plan, lengthOfStay } = prepareNeed(model, own);
  return {
    input,
    plan,
    lengthOfStay,
    change: needChangeOf(changes, { ...plan, areas: input.areas }),
    waits: prepareWaits(model, input, changes),
  };
}

/** Waits are compared in the first replications alone: a mean of patients needs fewer than a small chance does. */
const mostWaits = 2000;

/** One thread's share: replications [from, to), each with and without the plan. */
export function compareScenarioPart(prepared: PreparedScenario, from: number, to: number): ComparedPart {
  const { plan, change, waits } = prepared;
  const bedsAtHours = (changed: NeedChange | null) =>
    plan.areas.map((area, a) => {
      const beds = changed?.beds?.[a] ?? area.beds;
      return Array.from(plan.hourTo, (bin) => beds[bin - 1]);
    });
  const part = comparePart(simulateNeedPart(plan, from, to), simulateNeedPart(plan, from, to, change), {
    asIs: bedsAtHours(null),
    changed: bedsAtHours(change),
  });
  const until = Math.min(to, mostWaits);
  return waits === null || from >= until ? part : { ...part, waits: compareWaitsPart(waits, from, until) };
}

const normal95 = 1.959964;

/**
 * A chance's or mean's difference with its 95 % interval by the paired standard error. Where no replication differs the
 * interval of a chance reaches 3 / n either way (the rule of three: Hanley & Lippman-Hand 1983, JAMA 249, 1743).
 */
function figure(sums: PairedSums, cell: number, count: number, isChance: boolean): ComparedFigure {
  const { difference, se } = pairedDifference(sums, cell, count);
  const reach = isChance && sums.squares[cell] === 0 ? 3 / count : normal95 * se;
  return {
    asIs: (sums.asIs[cell] / count) * sums.unit,
    plan: (sums.changed[cell] / count) * sums.unit,
    difference,
    low: difference - reach,
    high: difference + reach,
  };
}

/**
 * The comparison from its parts, whichever way they were split: same input, changes and seed, same digits.
 * @throws RangeError when the parts do not hold the input's replications.
 */
export function scenarioFromParts(
  input: OutlookInput,
  { lengthOfStay, waits }: Pick<PreparedScenario, 'lengthOfStay' | 'waits'>,
  parts: readonly ComparedPart[],
): ScenarioResult {
  const part = mergeCompared(parts);
  const count = input.replications;
  if (part.fromReplication !== 0 || part.toReplication !== count) {
    throw new RangeError(`parts hold replications ${part.fromReplication}..${part.toReplication}`);
  }
  // The areas' sum is told only where every area's waits are known.
  const known = (row: number): boolean =>
    waits !== null && (row < part.areas ? waits.pairs[row] !== null : waits.pairs.every((pair) => pair !== null));
  const waitsOf = (row: number): ComparedFigure[] | null => {
    const sums = part.waits;
    if (sums === null || !known(row)) return null;
    const pairs = Math.min(count, mostWaits);
    return input.shifts.map((_, s) => figure(sums, row * part.shifts + s, pairs, false));
  };
  const hoursOf = (above: Int32Array, a: number): number[] =>
    Array.from({ length: part.hours }, (_, h) => above[a * part.hours + h] / count);
  return {
    engineVersion,
    replications: count,
    seed: input.seed,
    lengthOfStay,
    hours: [...input.hours],
    shifts: input.shifts.map(({ name, from, to }) => ({ name, from, to })),
    waitLimitMinutes: input.waitLimitMinutes ?? null,
    rows: Array.from({ length: part.areas + 1 }, (_, row): ComparedRow => {
      const isArea = row < part.areas;
      return {
        areaId: isArea ? input.areas[row].areaId : null,
        shifts: input.shifts.map((_, s) => figure(part.shiftShort, row * part.shifts + s, count, true)),
        bedHoursShort: figure(part.bedHoursShort, row, count, false),
        waits: waitsOf(row),
        hours: isArea
          ? { asIs: hoursOf(part.hourAsIs, row), plan: hoursOf(part.hourChanged, row) }
          : { asIs: [], plan: [] },
      };
    }),
  };
}
