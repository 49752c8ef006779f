import { createHash } from 'node:crypto';
import type { EntityManager } from 'typeorm';
import { readCalendar } from '../../database/read-calendar.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { readBedChanges, readPlan } from '../../database/read-staffed-beds.ts';
import type { Site } from '../../entities/Site.ts';

const day = 86_400;
/** A holiday acts on the days about it. */
const calendarBefore = 7 * day;
const calendarAfter = 23 * day;

/**
 * SHA-256 of what a week outlook issued at `at` stands on, census and time apart: the model, the plan with its dated
 * exceptions, the calendar, areas, shifts, the planning risk and the wait limit. Changes made to tonight's beds leave it as it is.
 */
export async function standsOn(read: EntityManager, site: Site, modelId: string, at: number): Promise<string> {
  const plan = await readPlan(read, site.id);
  const exceptions = (await readBedChanges(read, site.id, at)).filter(({ kind }) => kind === 'dated exception');
  const areas = await readAreas(read, site.id);
  const shifts = await readShifts(read, site.id);
  const facts = {
    modelId,
    plan: plan?.plan.version ?? null,
    exceptions: exceptions.map(({ areaId, fromAt, untilAt, beds }) => [areaId, fromAt, untilAt, beds]),
    calendar: await readCalendar(read, site, at - calendarBefore, at + calendarAfter),
    areas: areas.map(({ id, spaces, safeMinimum, bedStep, noticeHours, bedsPerNurse }) => [
      id,
      spaces,
      safeMinimum,
      bedStep,
      noticeHours,
      bedsPerNurse,
    ]),
    shifts: shifts.map(({ name, startMinute, endMinute, leadTimeHours }) => [
      name,
      startMinute,
      endMinute,
      leadTimeHours,
    ]),
    planningRisk: site.planningRisk,
    waitLimitMinutes: site.waitLimitMinutes,
    timeZone: site.timeZone,
  };
  return createHash('sha256').update(JSON.stringify(facts)).digest('hex');
}
