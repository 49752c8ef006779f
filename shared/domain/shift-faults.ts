import { clockText } from './clock-text.ts';
import type { ShiftPattern } from './shift-times.ts';

/** Shifts overlap at handover by at most this, minutes. The product's own rule. */
export const longestHandoverMinutes = 120;
const minutesOfDay = 1440;

/** A fault of a site's shifts. */
export interface ShiftFault {
  /** Which shift of the list; null: the day as a whole. */
  index: number | null;
  field: 'name' | 'startMinute' | 'endMinute' | null;
  /** The shifts concerned, by name. */
  at: string;
  message: string;
}

/** Minutes that a shift lasts; one that ends at its start lasts a day. */
export function shiftLength({ startMinute, endMinute }: Omit<ShiftPattern, 'name'>): number {
  return endMinute > startMinute ? endMinute - startMinute : endMinute - startMinute + minutesOfDay;
}

/**
 * What is wrong with the shifts of a day, all faults at once: none at all, a name used twice, two that start together,
 * an overlap above two hours, a hole in which no shift is on.
 */
export function shiftFaults(shifts: readonly ShiftPattern[]): ShiftFault[] {
  if (shifts.length === 0) return [{ index: null, field: null, at: 'Shifts', message: 'Enter at least one shift.' }];
  const faults: ShiftFault[] = [];
  const covered = new Uint8Array(minutesOfDay);
  for (const [index, shift] of shifts.entries()) {
    const length = shiftLength(shift);
    for (let minute = 0; minute < length; minute += 1) covered[(shift.startMinute + minute) % minutesOfDay] = 1;
    for (let other = 0; other < index; other += 1) {
      const earlier = shifts[other];
      const both = `${earlier.name} and ${shift.name}`;
      if (earlier.name.trim().toLowerCase() === shift.name.trim().toLowerCase()) {
        faults.push({ index, field: 'name', at: shift.name, message: 'Two shifts have this name.' });
      }
      if (earlier.startMinute === shift.startMinute) {
        const message = `Both start at ${clockText(shift.startMinute)}: only one shift can be in charge.`;
        faults.push({ index, field: 'startMinute', at: both, message });
        continue;
      }
      const overlap = overlapOf(earlier, shift);
      if (overlap > longestHandoverMinutes) {
        faults.push({
          index,
          field: 'startMinute',
          at: both,
          message: `They overlap by ${lengthText(overlap)}; a handover lasts ${lengthText(longestHandoverMinutes)} at most.`,
        });
      }
    }
  }
  const hole = holeIn(covered);
  if (hole) {
    const before = shifts.findIndex(({ endMinute }) => endMinute === hole.from);
    faults.push({
      index: before < 0 ? null : before,
      field: before < 0 ? null : 'endMinute',
      at: before < 0 ? 'Shifts' : shifts[before].name,
      message: `No shift is on from ${clockText(hole.from)} to ${clockText(hole.to)}.`,
    });
  }
  return faults;
}

/** The longest stretch of the day in which both are on, minutes. */
function overlapOf(one: ShiftPattern, other: ShiftPattern): number {
  const after = (minute: number, start: number) => (minute - start + minutesOfDay) % minutesOfDay;
  // Either may hand over to the other; a day's end is as good as any other minute.
  const reach = (outgoing: ShiftPattern, incoming: ShiftPattern) =>
    Math.min(
      Math.max(0, shiftLength(outgoing) - after(incoming.startMinute, outgoing.startMinute)),
      shiftLength(incoming),
    );
  return Math.max(reach(one, other), reach(other, one));
}

/** The first minutes of the day that nobody covers, over midnight if need be; null if all are covered. */
function holeIn(covered: Uint8Array): { from: number; to: number } | null {
  const from = covered.findIndex((on, minute) => on === 0 && covered[(minute + minutesOfDay - 1) % minutesOfDay] === 1);
  if (from < 0) return null;
  let to = from;
  while (covered[to % minutesOfDay] === 0) to += 1;
  return { from, to: to % minutesOfDay };
}

function lengthText(minutes: number): string {
  const hours = Math.floor(minutes / 60);
  const rest = minutes % 60;
  if (rest === 0) return `${String(hours)} ${hours === 1 ? 'hour' : 'hours'}`;
  return hours === 0 ? `${String(rest)} minutes` : `${String(hours)} h ${String(rest)} min`;
}
