import type { Shift } from '../../../shared/api/sites.ts';
import type { RequiredBeds } from '../../../shared/api/staffed-beds.ts';
import { localParts } from '../../../shared/domain/zoned-time.ts';
import { zoneOf } from '../../lib/format.ts';

/** What is required in one cell of the plan: the highest of the dates that the outlook speaks for. */
export interface RequiredCell {
  beds: number;
  /** Of those, how many cannot be had because the bed spaces do not exist. */
  doNotExist: number;
  /** Start of the shift on the date that asks for them, UTC seconds. */
  from: number;
  /** Dates that the outlook speaks for. */
  dates: number;
}

/** Key of a cell: area, shift by name, day of the week on which the shift starts (0 Monday). */
export const cellKey = (areaId: string, shiftName: string, day: number) => `${areaId}|${shiftName}|${String(day)}`;

/**
 * Requirements by cell of the plan. A shift whose times were changed since the outlook is left out: what was computed for
 * other hours is not said of these.
 */
export function requiredCells(
  required: RequiredBeds,
  shifts: readonly Pick<Shift, 'name' | 'startMinute'>[],
  timeZone: string,
): Map<string, RequiredCell> {
  const zone = zoneOf(timeZone);
  const cells = new Map<string, RequiredCell>();
  for (const area of required.areas) {
    for (const { name, from, beds, doNotExist } of area.shifts) {
      const { weekday, hour, minute } = localParts(zone.toLocal(from));
      if (!shifts.some((shift) => shift.name === name && shift.startMinute === hour * 60 + minute)) continue;
      const key = cellKey(area.areaId, name, weekday - 1);
      const known = cells.get(key);
      const dates = (known?.dates ?? 0) + 1;
      if (!known || beds > known.beds) cells.set(key, { beds, doNotExist, from, dates });
      else known.dates = dates;
    }
  }
  return cells;
}
