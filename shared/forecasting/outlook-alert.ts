import { shiftInCharge, type ShiftTime } from '../domain/shift-times.ts';
import type { NeedByHour } from './outlook-types.ts';
import { printedShortfall } from './printed-shortfall.ts';

/** How far below its limit a chance must have fallen before the same shift hears of the area again. */
const fallPoints = 0.05;
/** Hours that are looked at where a site has no shifts. */
const hoursWithoutShifts = 16;
/** Room for rounding: 0.15 − 0.05 is not quite 0.1. */
const rounding = 1e-9;

/** The newest alert of an area. */
export interface LastAlert {
  /** Start of the shift that was in charge; null if none was. */
  shiftFrom: number | null;
  /** An outlook since then showed the chance well below the limit. */
  rearmed: boolean;
}

export interface AlertDecision {
  send: boolean;
  /** The chance has fallen well below the limit: the next passing is told again. */
  rearm: boolean;
  /** Highest chance of shortfall in the shift in charge and the next, as printed for the area. */
  chance: number;
  /** Indexes of the outlook's hours: of that chance, and of all that pass the limit, ascending. */
  peakIndex: number | null;
  past: number[];
}

/** The hours an alert speaks of: until the end of the shift after the one in charge, UTC seconds. */
export function alertSpan(
  shifts: readonly ShiftTime[],
  issuedAt: number,
): { /** Start of the shift in charge. */ shiftFrom: number | null; until: number } {
  const current = shiftInCharge(shifts, issuedAt);
  const next = shifts
    .filter((shift) => shift.from > (current?.from ?? issuedAt))
    .reduce<ShiftTime | null>((first, shift) => (first && first.from <= shift.from ? first : shift), null);
  const until = next?.to ?? current?.to ?? issuedAt + hoursWithoutShifts * 3600;
  return { shiftFrom: current?.from ?? null, until };
}

/**
 * Whether an outlook is to be told of by alert for one area: when its printed chance of shortfall passes the alert limit in
 * the shift in charge or the next, and either no alert was sent, or the chance had fallen 5 points below the limit since
 * (for a limit under 10 %: to half of it), or another shift is in charge now. In a gap between shifts the last one still
 * counts as in charge. An area without a census is never told of and changes nothing: its figures are the model's own.
 *
 * Pure; cost linear in hours.
 */
export function decideAlert({
  area,
  spaces,
  alertLimit,
  hours,
  issuedAt,
  shifts,
  last,
}: {
  area: Pick<NeedByHour, 'shortfall' | 'shortfallWithin'> & { counted: boolean };
  spaces: number;
  alertLimit: number;
  hours: readonly number[];
  issuedAt: number;
  shifts: readonly ShiftTime[];
  last: LastAlert | null;
}): AlertDecision {
  const { shiftFrom, until } = alertSpan(shifts, issuedAt);
  const printed = printedShortfall(area, spaces);
  let chance = 0;
  let peakIndex: number | null = null;
  const past: number[] = [];
  for (const [index, at] of hours.entries()) {
    if (at <= issuedAt || at >= until) continue;
    const here = printed[index]?.chance ?? 0;
    if (here > alertLimit) past.push(index);
    if (peakIndex === null || here > chance) [chance, peakIndex] = [here, index];
  }
  if (!area.counted || peakIndex === null) return { send: false, rearm: false, chance, peakIndex, past };
  const anotherShift = last !== null && shiftFrom !== null && shiftFrom !== last.shiftFrom;
  const low = Math.max(alertLimit - fallPoints, alertLimit / 2);
  return {
    send: past.length > 0 && (last === null || last.rearmed || anotherShift),
    rearm: last !== null && !last.rearmed && chance <= low + rounding,
    chance,
    peakIndex,
    past,
  };
}
