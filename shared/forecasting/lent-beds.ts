import type { WeekGap } from './week-gaps.ts';
import type { WeekOutlookResult } from './week-outlook-types.ts';

/** Beds that one area could lend to another throughout a shift. */
export interface LentBeds {
  /** Who lends. */
  areaId: string;
  beds: number;
}

/**
 * What areas that may lend could spare for each gap, in the gaps' order (worst first): every bed is lent once. A lender
 * spares, in its own steps, what its plan has beyond the beds for the planning risk and the safe minimum at its fewest in the
 * shift, so that its own chance of shortfall stays within the risk at every moment; one that needs more itself, or was not
 * counted, lends nothing.
 * @param areas which areas may lend to which, and the step they close beds in; an area that is not named lends nothing
 * @returns one list a gap; together they are at most what the gap lacks
 */
export function lentBeds(
  result: Pick<WeekOutlookResult, 'shifts' | 'areas'>,
  gaps: readonly WeekGap[],
  areas: readonly { id: string; lendsTo: readonly string[]; bedStep: number }[],
): LentBeds[][] {
  const left = new Map<string, number>();
  return gaps.map(({ areaId, shift, need }) => {
    const s = result.shifts.findIndex(({ from, name }) => from === shift.from && name === shift.name);
    let wanted = need.bedsToAdd;
    return areas.flatMap(({ id, lendsTo, bedStep }): LentBeds[] => {
      const lender = result.areas.find((area) => area.areaId === id);
      if (!lender?.counted || id === areaId || !lendsTo.includes(areaId) || wanted <= 0) return [];
      const own = lender.shifts[s];
      const key = `${id} ${String(s)}`;
      const spare = left.get(key) ?? (own.bedsToAdd > 0 ? 0 : own.staffedLeast - own.bedsToStaff);
      const beds = Math.floor(Math.min(spare, wanted) / bedStep) * bedStep;
      if (beds <= 0) return [];
      left.set(key, spare - beds);
      wanted -= beds;
      return [{ areaId: id, beds }];
    });
  });
}
