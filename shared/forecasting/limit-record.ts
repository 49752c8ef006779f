import { printedShortfall } from './printed-shortfall.ts';
import type { NeedByHour } from './outlook-types.ts';

/** One night as one area's limit is judged by it. */
export interface LimitNight {
  /** The date on which the night starts, YYYY-MM-DD. */
  date: string;
  /** Highest printed chance of shortfall in the night, 0..1; null where no outlook that counted the area stood when it began. */
  chance: number | null;
  /** Whether need was above staffed beds at any full hour of the night; null where that is not known. */
  ranShort: boolean | null;
}

/** How a limit would have done over the nights that can be judged: those with both an outlook and what then happened. */
export interface LimitRecord {
  /** Nights handed in, and how many of them can be judged. */
  nights: number;
  judged: number;
  /** Nights whose chance passed the limit. */
  warned: number;
  /** Nights that ran short. */
  ranShort: number;
  /** Ran short without a warning. */
  missed: number;
  /** Warned, and did not run short. */
  unneeded: number;
}

/**
 * "How often would this limit have warned": a night was warned of if its highest printed chance passes the limit, the same
 * comparison by which Tonight speaks up (chance > limit). Nights of which either side is not known are left out and
 * counted: what is missing is never taken for calm.
 * @param limit 0..1. Throws a RangeError outside. Cost: linear in nights.
 */
export function recordOfLimit(nights: readonly LimitNight[], limit: number): LimitRecord {
  if (!(limit >= 0 && limit <= 1)) throw new RangeError(`limit must lie within 0..1, got ${limit}`);
  const record: LimitRecord = { nights: nights.length, judged: 0, warned: 0, ranShort: 0, missed: 0, unneeded: 0 };
  for (const { chance, ranShort } of nights) {
    if (chance === null || ranShort === null) continue;
    record.judged += 1;
    const warned = chance > limit;
    if (warned) record.warned += 1;
    if (ranShort) record.ranShort += 1;
    if (ranShort && !warned) record.missed += 1;
    if (warned && !ranShort) record.unneeded += 1;
  }
  return record;
}

/**
 * The highest chance that an outlook printed for an area within a night.
 * @param spaces bed spaces of the area: small areas print the chance within the hour (`printedShortfall`)
 * @param from,to the night, UTC seconds; hours at `from` and before `to` count
 * @returns null where the area was not counted or the outlook has no hour in the night
 */
export function nightChance(
  hours: readonly number[],
  area: Pick<NeedByHour, 'shortfall' | 'shortfallWithin'> & { counted: boolean },
  spaces: number,
  from: number,
  to: number,
): number | null {
  if (!area.counted) return null;
  const printed = printedShortfall(area, spaces);
  let highest: number | null = null;
  for (const [index, at] of hours.entries()) {
    if (at < from || at >= to) continue;
    const { chance } = printed[index];
    if (highest === null || chance > highest) highest = chance;
  }
  return highest;
}

/**
 * Whether an area ran short in a night.
 * @param present everyone in the area's care at each full hour of the night; null where not known
 * @param staffed staffed beds in force at the same hours
 * @returns true if need was above staffed beds at any known hour; false only if every hour is known and none was short;
 * otherwise null. Throws a RangeError where the two differ in length.
 */
export function ranShortInNight(present: readonly (number | null)[], staffed: readonly number[]): boolean | null {
  if (present.length !== staffed.length) throw new RangeError('present and staffed must be of the same hours');
  let known = present.length > 0;
  for (const [index, count] of present.entries()) {
    if (count === null) known = false;
    else if (count > staffed[index]) return true;
  }
  return known ? false : null;
}
