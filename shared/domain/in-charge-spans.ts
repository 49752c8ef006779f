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
