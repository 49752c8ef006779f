import type { Express } from 'express';
import { getWeekAhead, getWeekOutlook, listWeekOutlooks } from '../../../shared/api/week-outlooks.ts';
import { readWeekOutlook } from '../../database/read-week-outlook.ts';
import type { Dependencies } from '../../dependencies.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import { notFound } from '../../errors.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { readPastShifts } from './past-shifts.ts';
import { presentWeekAhead, presentWeekOutlook } from './present.ts';
import type { WeekTrigger } from './week-outlook-due.ts';

/** Week outlooks, as they are stored: nothing is computed by a request. */
export function addWeekAheadRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read } = deps.database;

  addSiteRoute(app, table, deps, getWeekAhead, ({ site, now }) => presentWeekAhead(deps, site, now));

  addSiteRoute(app, table, deps, listWeekOutlooks, async ({ site, query }) => {
    const rows = await read
      .createQueryBuilder(WeekOutlookRow, 'week')
      .select(['week.id', 'week.issuedAt', 'week.trigger'])
      .where('week.siteId = :siteId AND week.issuedAt >= :from AND week.issuedAt < :to', { siteId: site.id, ...query })
      .orderBy('week.issuedAt', 'ASC')
      .addOrderBy('week.rowid', 'ASC')
      .getMany();
    return {
      outlooks: rows.map(({ id, issuedAt, trigger }) => ({ id, issuedAt, trigger: trigger as WeekTrigger })),
    };
  });

  addSiteRoute(app, table, deps, getWeekOutlook, async ({ site, params }) => {
    const stored = await readWeekOutlook(read, site.id, params.weekOutlookId);
    if (!stored) throw notFound('This week outlook');
    return {
      ...(await presentWeekOutlook(read, stored)),
      past: await readPastShifts(read, site, stored.row.issuedAt),
    };
  });
}
