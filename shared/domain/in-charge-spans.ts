import type { ShiftTime } from './shift-times.ts';

/**
 * Each shift while it is in charge within [from, to): until the next one starts, since the overlap at handover belongs to the
 * incoming shift. What is left of the shift under way comes first.
 * @param shifts ascending by start
 */
export function inChargeSpans(shifts: readonly ShiftTime[], from: number, to: number): ShiftTime[] {
  return shifts.flatMap((shift, i) => {
    const next = shifts.slice(i + 1).find((later) => later.from > shift.from);
    const start = Math.max(shift.from, from);
    const end = Math.min(shift.to, next?.from ?? Infinity, to);
    return end > start ? [{ name: shift.name, from: start, to: end }] : [];
  });
}

/**
 * The same shifts, each ending where the next one begins: its own half hours, for which its beds are staffed. A shift whose
 * own half hours are over at `at` (it only hands over) keeps its end.
 * @param shifts ascending by start
 */
export function withOwnEnds<Shift extends ShiftTime>(shifts: readonly Shift[], at: number): Shift[] {
  return shifts.map((shift, i) => {
    const next = shifts.slice(i + 1).find((later) => later.from > shift.from);
    return next && next.from < shift.to && next.from > at ? { ...shift, to: next.from } : shift;
  });
}
