import type { Zone } from './zoned-time.ts';

/** A shift in minutes of the local day; one that ends at or before its start ends on the next day. */
export interface ShiftPattern {
  name: string;
  startMinute: number;
  endMinute: number;
}

/** One shift on one date, UTC seconds. Shifts may overlap at handover: the overlap belongs to the incoming shift. */
export interface ShiftTime {
  name: string;
  from: number;
  to: number;
}

/** The instant of a local time; a skipped time is moved on by the length of the gap, a repeated one is the first. */
export function instantOfLocal(zone: Zone, localSeconds: number): number {
  const found = zone.fromLocal(localSeconds);
  if (found.length > 0) return found[0];
  return localSeconds - zone.offsetAt(localSeconds - 86_400);
}

/**
 * Every shift that overlaps [from, to), ascending by start.
 * Cost: one step a day and pattern.
 */
export function shiftsBetween(zone: Zone, patterns: readonly ShiftPattern[], from: number, to: number): ShiftTime[] {
  const found: ShiftTime[] = [];
  const firstDay = Math.floor(zone.toLocal(from) / 86_400) - 2;
  const lastDay = Math.floor(zone.toLocal(to) / 86_400) + 1;
  for (let day = firstDay; day <= lastDay; day += 1) {
    for (const { name, startMinute, endMinute } of patterns) {
      const endsNextDay = endMinute <= startMinute ? 1 : 0;
      const start = instantOfLocal(zone, day * 86_400 + startMinute * 60);
      const end = instantOfLocal(zone, (day + endsNextDay) * 86_400 + endMinute * 60);
      if (end > from && start < to) found.push({ name, from: start, to: end });
    }
  }
  return found.sort((a, b) => a.from - b.from);
}

/** The shift in charge at an instant: of those running, the one that started last. Null in a hole. */
export function shiftInCharge(shifts: readonly ShiftTime[], at: number): ShiftTime | null {
  let inCharge: ShiftTime | null = null;
  for (const shift of shifts) {
    if (shift.from <= at && at < shift.to && (inCharge === null || shift.from > inCharge.from)) inCharge = shift;
  }
  return inCharge;
}
