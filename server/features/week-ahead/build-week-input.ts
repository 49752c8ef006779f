import type { EntityManager } from 'typeorm';
import { instantOfLocal, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import type { ShiftPattern } from '../../../shared/domain/shift-times.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import { fullHoursAfter, readNeedInput } from '../../database/read-need-input.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import type { Site } from '../../entities/Site.ts';

const day = 86_400;
const wholeDays = 14;

/** A week outlook's input before the thread that computes it has counted the ambulances. */
export type WeekInput = Omit<WeekOutlookInput, 'ambulance'>;

/**
 * The hours of a week outlook: what is left of today and 14 whole days, and on until the last shift that begins within
 * them has ended. @returns full local hours, and the midnight that ends the whole days.
 */
export function weekHours(
  zone: Zone,
  shifts: readonly ShiftPattern[],
  now: number,
): { hours: number[]; daysUntil: number } {
  const today = Math.floor(zone.toLocal(now) / day);
  const daysUntil = instantOfLocal(zone, (today + 1 + wholeDays) * day);
  const begun = shiftsBetween(zone, shifts, now, daysUntil).map(({ to }) => to);
  const end = Math.max(daysUntil, ...begun);
  const hours = fullHoursAfter(zone, now, Math.ceil((end - now) / 3600) + 2);
  const last = hours.findIndex((at) => at >= end);
  return { hours: hours.slice(0, last + 1), daysUntil };
}

/**
 * Gathers everything that a week outlook is computed from, as of `now`.
 * @returns null where the site has no staffed-bed plan that names every area.
 */
export async function buildWeekInput(
  read: EntityManager,
  site: Site,
  modelAreaIds: readonly string[],
  now: number,
  replications: number,
): Promise<WeekInput | null> {
  const shifts = await readShifts(read, site.id);
  const { hours, daysUntil } = weekHours(makeZone(site.timeZone), shifts, now);
  const need = await readNeedInput(read, site, modelAreaIds, now, hours, replications);
  if (!need) return null;
  const areas = new Map((await readAreas(read, site.id)).map((area) => [area.id, area]));
  const leadOf = new Map(shifts.map((shift) => [shift.name, shift.leadTimeHours]));
  return {
    ...need,
    calendar: need.calendar ?? [],
    areas: need.areas.map((area) => ({
      ...area,
      noticeHours: areas.get(area.areaId)?.noticeHours ?? 0,
      bedsPerNurse: areas.get(area.areaId)?.bedsPerNurse ?? null,
    })),
    shifts: need.shifts
      .filter(({ from }) => from < daysUntil)
      .map((shift) => ({ ...shift, leadTimeHours: leadOf.get(shift.name) ?? null })),
    daysUntil,
  };
}
