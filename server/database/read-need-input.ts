import { randomInt } from 'node:crypto';
import type { EntityManager } from 'typeorm';
import { shiftsBetween } from '../../shared/domain/shift-times.ts';
import { makeZone, type Zone } from '../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import type { Site } from '../entities/Site.ts';
import { readCalendar } from './read-calendar.ts';
import { censusDroppedAfterSeconds, readNewestCensus } from './read-census.ts';
import { readAreas, readShifts } from './read-site.ts';
import { readStaffedBedSteps } from './read-staffed-beds.ts';

const week = 7 * 86_400;

/** The full local hours after an instant, UTC seconds. A clock change may put two within an hour of real time, or none. */
export function fullHoursAfter(zone: Zone, at: number, count: number): number[] {
  const hours: number[] = [];
  let next = at;
  while (hours.length < count) {
    const rest = ((zone.toLocal(next) % 3600) + 3600) % 3600;
    const candidate = next + 3600 - rest;
    // Where the clock jumps within the step, the candidate may not be a full hour any more: go on from the jump.
    const jump = zone.changesBetween(next, candidate).at(0);
    if (jump && ((zone.toLocal(candidate) % 3600) + 3600) % 3600 !== 0) {
      next = jump.at;
      if (((zone.toLocal(next) % 3600) + 3600) % 3600 === 0) hours.push(next);
      continue;
    }
    hours.push(candidate);
    next = candidate;
  }
  return hours;
}

/**
 * Gathers everything that need in some hours ahead is computed from, as of `now`: census, staffed beds, areas and limits,
 * shifts, calendar; with a new seed.
 * @param modelAreaIds the model's areas in its order: an area that the model has never seen cannot be forecast
 * @param hours full local hours, UTC seconds, ascending, the first after now
 * @returns null where the site has no staffed-bed plan that names every area.
 */
export async function readNeedInput(
  read: EntityManager,
  site: Site,
  modelAreaIds: readonly string[],
  now: number,
  hours: number[],
  replications: number,
): Promise<OutlookInput | null> {
  const zone = makeZone(site.timeZone);
  const all = await readAreas(read, site.id);
  const areas = modelAreaIds.flatMap((id) => all.filter((area) => area.id === id));
  const end = hours[hours.length - 1] + 3600;
  const steps = await readStaffedBedSteps(
    read,
    site.id,
    zone,
    areas.map((area) => area.id),
    now,
    end,
  );
  if (!steps) return null;
  const census = await readNewestCensus(read, site.id, now - censusDroppedAfterSeconds, now);
  const counted = new Map(census.areas.map((area) => [area.areaId, area]));
  const shifts = shiftsBetween(zone, await readShifts(read, site.id), now, end);
  const arrivals = census.arrivalsSinceMidnight;
  return {
    issuedAt: now,
    timeZone: site.timeZone,
    hours,
    areas: areas.map((area) => {
      const count = counted.get(area.id);
      return {
        areaId: area.id,
        census: count
          ? { takenAt: count.takenAt, present: count.present, waiting: count.waiting, boarding: count.boarding }
          : null,
        staffedBeds: steps.get(area.id) ?? [],
        spaces: area.spaces,
        safeMinimum: area.safeMinimum,
        bedStep: area.bedStep,
        alertLimit: area.alertLimit,
      };
    }),
    undecided: census.undecided ? { takenAt: census.undecided.takenAt, waiting: census.undecided.waiting } : null,
    planningRisk: site.planningRisk,
    waitLimitMinutes: site.waitLimitMinutes,
    shifts,
    arrivalsSince: arrivals ? arrivalsSinceMidnight(zone, arrivals) : null,
    // A holiday acts on the days about it.
    calendar: await readCalendar(read, site, now - week, end + week),
    seed: randomInt(0, 2 ** 31),
    replications,
  };
}

function arrivalsSinceMidnight(zone: Zone, entry: { takenAt: number; count: number }): OutlookInput['arrivalsSince'] {
  const local = zone.toLocal(entry.takenAt);
  const midnight = zone.fromLocal(local - (((local % 86_400) + 86_400) % 86_400)).at(0);
  if (midnight === undefined || entry.takenAt - midnight < 900) return null;
  return { from: midnight, to: entry.takenAt, count: entry.count };
}
