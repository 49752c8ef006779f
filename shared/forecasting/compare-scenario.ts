import type { PlanChange } from '../domain/plan-change.ts';
import { comparePart, mergeCompared, pairedDifference } from './compare-need.ts';
import type { ComparedPart, PairedSums } from './compare-need.ts';
import { engineVersion } from './engine-version.ts';
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
  rows: ComparedRow[];
}

/** What the parts of a comparison stand on; made once a thread. */
export interface PreparedScenario {
  input: OutlookInput;
  plan: NeedPlan;
  change: NeedChange;
  lengthOfStay: OutlookResult['lengthOfStay'];
}

/** Makes ready for comparing. @throws RangeError naming a bad input or change. */
export function prepareScenario(
  model: OutlookModel,
  input: OutlookInput,
  changes: readonly PlanChange[],
): PreparedScenario {
  const { plan, lengthOfStay } = prepareNeed(model, input);
  return { input, plan, lengthOfStay, change: needChangeOf(changes, { ...plan, areas: input.areas }) };
}

/** One thread's share: replications [from, to), each with and without the plan. */
export function compareScenarioPart(prepared: PreparedScenario, from: number, to: number): ComparedPart {
  const { plan, change } = prepared;
  const bedsAtHours = (changed: NeedChange | null) =>
    plan.areas.map((area, a) => {
      const beds = changed?.beds?.[a] ?? area.beds;
      return Array.from(plan.hourTo, (bin) => beds[bin - 1]);
    });
  return comparePart(simulateNeedPart(plan, from, to), simulateNeedPart(plan, from, to, change), {
    asIs: bedsAtHours(null),
    changed: bedsAtHours(change),
  });
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
  lengthOfStay: OutlookResult['lengthOfStay'],
  parts: readonly ComparedPart[],
): ScenarioResult {
  const part = mergeCompared(parts);
  const count = input.replications;
  if (part.fromReplication !== 0 || part.toReplication !== count) {
    throw new RangeError(`parts hold replications ${part.fromReplication}..${part.toReplication}`);
  }
  const hoursOf = (above: Int32Array, a: number): number[] =>
    Array.from({ length: part.hours }, (_, h) => above[a * part.hours + h] / count);
  return {
    engineVersion,
    replications: count,
    seed: input.seed,
    lengthOfStay,
    hours: [...input.hours],
    shifts: input.shifts.map(({ name, from, to }) => ({ name, from, to })),
    rows: Array.from({ length: part.areas + 1 }, (_, row): ComparedRow => {
      const isArea = row < part.areas;
      return {
        areaId: isArea ? input.areas[row].areaId : null,
        shifts: input.shifts.map((_, s) => figure(part.shiftShort, row * part.shifts + s, count, true)),
        bedHoursShort: figure(part.bedHoursShort, row, count, false),
        hours: isArea
          ? { asIs: hoursOf(part.hourAsIs, row), plan: hoursOf(part.hourChanged, row) }
          : { asIs: [], plan: [] },
      };
    }),
  };
}
