import { LessThanOrEqual, Not, type EntityManager } from 'typeorm';
import type { z } from 'zod';
import type { WeekAhead, weekOutlookTrigger } from '../../../shared/api/week-outlooks.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Site } from '../../entities/Site.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import { standsOn } from './stands-on.ts';

export type WeekTrigger = z.infer<typeof weekOutlookTrigger>;

/** A new week outlook is issued each day at this local time, before the day's staffing is talked over. */
export const dailyAtSeconds = 5 * 3600;

/** Why a site can have no week outlook, and what to do about it; null where it can. */
export async function whyNoWeekOutlook(read: EntityManager, site: Site): Promise<WeekAhead['missing']> {
  const model = await readModelInUse(read, site.id);
  if (!model) {
    return {
      reason: 'no model',
      next: 'A data steward loads a visit log and fits a model; an operations manager approves it. Then the week ahead begins by itself.',
    };
  }
  if ((await readModelParameters(read, model.id)).arrival.coarse) {
    return {
      reason: 'little history',
      next: 'The visit logs hold fewer than eight weeks: enough for the next 24 hours on Tonight, not for a week. Load more visits and fit a new model.',
    };
  }
  const plan = await readPlan(read, site.id);
  const { areaIds } = await readModelParameters(read, model.id);
  if (!plan || areaIds.some((id) => !plan.areas.some(({ areaId }) => areaId === id))) {
    return {
      reason: 'no staffed-bed plan',
      next: 'An operations manager saves a staffed-bed plan that names every care area of this site.',
    };
  }
  return null;
}

/** The last local time at which a daily outlook was to be issued. */
export function lastDailyTime(timeZone: string, now: number): number {
  const zone = makeZone(timeZone);
  const today = Math.floor(zone.toLocal(now) / 86_400);
  const at = instantOfLocal(zone, today * 86_400 + dailyAtSeconds);
  return at <= now ? at : instantOfLocal(zone, (today - 1) * 86_400 + dailyAtSeconds);
}

/** Why a new week outlook is due at a site now; null where none is, or none can be made. */
export async function weekOutlookDue(read: EntityManager, site: Site, now: number): Promise<WeekTrigger | null> {
  const model = await readModelInUse(read, site.id);
  if (!model || (await whyNoWeekOutlook(read, site))) return null;
  const newest = await read.findOne(WeekOutlookRow, {
    // One from before the clock was set back, by an hour or more, does not stand in the way of today's.
    where: { siteId: site.id, trigger: Not('recomputed'), issuedAt: LessThanOrEqual(now + 3600) },
    order: { issuedAt: 'DESC' },
    select: { id: true, issuedAt: true, standsOn: true },
  });
  if (!newest) return 'first';
  if (newest.standsOn !== (await standsOn(read, site, model.id, newest.issuedAt))) return 'what it stands on changed';
  return newest.issuedAt < lastDailyTime(site.timeZone, now) ? 'daily' : null;
}
