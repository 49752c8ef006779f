import { halfHoursOfWeek } from './bed-schedule.ts';
import type { ShiftPattern } from './shift-times.ts';

const halfHoursOfDay = 48;

/** A shift's half hours of week on each day, Monday first. What lies past midnight belongs to the day on which the shift starts. */
export interface ShiftCells<S> {
  shift: S;
  days: number[][];
}

/**
 * Which shift is in charge of each half hour of week, as the cells of a plan: one for each shift and day. A half hour
 * belongs to the shift that started last at or before its start (an overlap at handover is the incoming shift's), so that
 * together the cells hold every half hour once. A shift that is never in charge is left out.
 * @param shifts those of the site; of two that start together the later in the list is in charge
 */
export function planCells<S extends Omit<ShiftPattern, 'name'>>(shifts: readonly S[]): ShiftCells<S>[] {
  const cells = shifts.map((shift) => ({ shift, days: Array.from({ length: 7 }, (): number[] => []) }));
  if (cells.length === 0) return [];
  for (let halfHour = 0; halfHour < halfHoursOfWeek; halfHour += 1) {
    const minute = (halfHour % halfHoursOfDay) * 30;
    const day = Math.floor(halfHour / halfHoursOfDay);
    const started = latest(cells, (start) => start <= minute);
    if (started) started.days[day].push(halfHour);
    else latest(cells, () => true)?.days[(day + 6) % 7].push(halfHour);
  }
  // Sunday's night ends on Monday morning: in the order of time, not of the week's numbers.
  for (const { days } of cells) {
    days[6].sort(
      (a, b) => a + (a < halfHoursOfDay ? halfHoursOfWeek : 0) - b - (b < halfHoursOfDay ? halfHoursOfWeek : 0),
    );
  }
  return cells
    .filter(({ days }) => days.some((own) => own.length > 0))
    .sort((a, b) => a.shift.startMinute - b.shift.startMinute);
}

function latest<C extends { shift: { startMinute: number } }>(
  cells: readonly C[],
  may: (start: number) => boolean,
): C | null {
  let found: C | null = null;
  for (const cell of cells) {
    const start = cell.shift.startMinute;
    if (may(start) && (found === null || start >= found.shift.startMinute)) found = cell;
  }
  return found;
}

/** The figures of a cell: one if they agree, else their range; a hole if any is missing. */
export function cellFigures(
  halfHours: readonly (number | null)[],
  own: readonly number[],
): { low: number | null; high: number | null; hole: boolean } {
  let low: number | null = null;
  let high: number | null = null;
  let hole = false;
  for (const index of own) {
    const beds = halfHours[index];
    if (beds === null) {
      hole = true;
      continue;
    }
    if (low === null || beds < low) low = beds;
    if (high === null || beds > high) high = beds;
  }
  return { low, high, hole };
}
