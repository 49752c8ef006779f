import { Between, MoreThan, Not, type EntityManager } from 'typeorm';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import type { Site } from '../../entities/Site.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import { dailyAtSeconds } from './week-outlook-due.ts';

const day = 86_400;
/** Last week is told from an outlook issued seven to nine days ago. */
const reachDays = 8;
const oldestModel = 8 * day;

/** An outlook to make afterwards: its time, and a model trained on nothing later. */
export interface LookBack {
  at: number;
  modelId: string;
}

/**
 * Daily outlooks of the last eight days, before a site's first, that can be made afterwards: where the recomputed track record
 * (or an earlier fit) left a model that knew no visit after that time.
 */
export async function lookBacksDue(read: EntityManager, site: Site, now: number): Promise<LookBack[]> {
  const siteId = site.id;
  const first = await read.findOne(WeekOutlookRow, {
    where: { siteId, trigger: Not('recomputed') },
    order: { issuedAt: 'ASC' },
    select: { id: true, issuedAt: true },
  });
  if (!first || first.issuedAt < now - reachDays * day) return [];
  const made = await read.find(WeekOutlookRow, {
    where: { siteId, issuedAt: MoreThan(now - (reachDays + 2) * day) },
    select: { id: true, issuedAt: true },
  });
  const zone = makeZone(site.timeZone);
  const today = Math.floor(zone.toLocal(now) / day);
  const found: LookBack[] = [];
  for (let back = reachDays; back >= 0; back -= 1) {
    const at = instantOfLocal(zone, (today - back) * day + dailyAtSeconds);
    if (at >= first.issuedAt || made.some(({ issuedAt }) => issuedAt === at)) continue;
    const model = await read.findOne(ArrivalModelRow, {
      where: { siteId, trainedTo: Between(at - oldestModel, at) },
      order: { trainedTo: 'DESC' },
      select: { id: true },
    });
    if (model) found.push({ at, modelId: model.id });
  }
  return found;
}
