import type { EntityManager } from 'typeorm';
import type { WeekOutlookResult } from '../../shared/forecasting/week-outlook-types.ts';
import { WeekOutlookRow } from '../entities/WeekOutlookRow.ts';

/** A stored week outlook with its result. */
export interface StoredWeekOutlook {
  row: WeekOutlookRow;
  result: WeekOutlookResult;
}

const parsed = (row: WeekOutlookRow | null): StoredWeekOutlook | null =>
  row && { row, result: JSON.parse(row.result) as WeekOutlookResult };

/**
 * The newest week outlook issued at or before an instant (of all, without one); null before the first.
 * @param recomputed whether one made afterwards counts too
 */
export async function readNewestWeekOutlook(
  read: EntityManager,
  siteId: string,
  until = Number.MAX_SAFE_INTEGER,
  recomputed = false,
): Promise<StoredWeekOutlook | null> {
  const row = await read
    .createQueryBuilder(WeekOutlookRow, 'week')
    .addSelect('week.result')
    .where('week.siteId = :siteId AND week.issuedAt <= :until', { siteId, until })
    .andWhere(recomputed ? '1 = 1' : "week.trigger <> 'recomputed'")
    .orderBy('week.issuedAt', 'DESC')
    .addOrderBy('week.rowid', 'DESC')
    .limit(1)
    .getOne();
  return parsed(row);
}

/** One week outlook of a site; null if it has no such one. */
export async function readWeekOutlook(
  read: EntityManager,
  siteId: string,
  id: string,
): Promise<StoredWeekOutlook | null> {
  const row = await read
    .createQueryBuilder(WeekOutlookRow, 'week')
    .addSelect('week.result')
    .where('week.siteId = :siteId AND week.id = :id', { siteId, id })
    .getOne();
  return parsed(row);
}
