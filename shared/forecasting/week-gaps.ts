import type { WeekOutlookResult, WeekShiftNeed, WeekSpan } from './week-outlook-types.ts';

/** One area in one shift to come whose plan does not meet the planning risk or the safe minimum. */
export interface WeekGap {
  areaId: string;
  shift: WeekSpan;
  need: WeekShiftNeed;
}

/** Whether a gap's last chance to book is still to come. */
export function mayStillBook(gap: Pick<WeekGap, 'need'>, now: number): boolean {
  return gap.need.lastChanceAt > now;
}

/**
 * The gaps of shifts that begin in (now, until), worst first: most beds to add, then the highest chance, then the earliest.
 * @param until UTC seconds; absent takes every shift of the outlook
 */
export function weekGaps(
  result: Pick<WeekOutlookResult, 'shifts' | 'areas'>,
  now: number,
  until = Number.MAX_SAFE_INTEGER,
): WeekGap[] {
  const gaps = result.areas.flatMap(({ areaId, shifts }) =>
    shifts.flatMap((need, s): WeekGap[] => {
      const shift = result.shifts[s];
      return need.bedsToAdd > 0 && shift.from > now && shift.from < until ? [{ areaId, shift, need }] : [];
    }),
  );
  return gaps.sort(
    (a, b) => b.need.bedsToAdd - a.need.bedsToAdd || b.need.someTime - a.need.someTime || a.shift.from - b.shift.from,
  );
}

/** The same by last chance to book: those still to come first, soonest first; those passed after them. */
export function byLastChance(gaps: readonly WeekGap[], now: number): WeekGap[] {
  return [...gaps].sort(
    (a, b) =>
      Number(mayStillBook(b, now)) - Number(mayStillBook(a, now)) ||
      a.need.lastChanceAt - b.need.lastChanceAt ||
      b.need.bedsToAdd - a.need.bedsToAdd,
  );
}
