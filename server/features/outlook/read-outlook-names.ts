import type { EntityManager, SelectQueryBuilder } from 'typeorm';
import type { z } from 'zod';
import type { OutlookThen, outlookTrigger } from '../../../shared/api/outlooks.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';

/** An outlook by name: when it was issued and why. */
export type OutlookName = NonNullable<OutlookThen['earlier']>;

function namesOf(read: EntityManager, siteId: string): SelectQueryBuilder<OutlookRow> {
  return read
    .createQueryBuilder(OutlookRow, 'outlook')
    .select(['outlook.id', 'outlook.issuedAt', 'outlook.trigger'])
    .where('outlook.siteId = :siteId', { siteId });
}

function toName({ id, issuedAt, trigger }: OutlookRow): OutlookName {
  return { id, issuedAt, trigger: trigger as z.infer<typeof outlookTrigger> };
}

/** The outlooks issued in [from, to), oldest first. */
export async function readOutlookNames(
  read: EntityManager,
  siteId: string,
  from: number,
  to: number,
): Promise<OutlookName[]> {
  const rows = await namesOf(read, siteId)
    .andWhere('outlook.issuedAt >= :from AND outlook.issuedAt < :to', { from, to })
    .orderBy('outlook.issuedAt', 'ASC')
    .addOrderBy('outlook.rowid', 'ASC')
    .getMany();
  return rows.map(toName);
}

/** The outlook that stood at an instant: the newest issued at or before it. Null if there was none. */
export async function readOutlookStanding(
  read: EntityManager,
  siteId: string,
  at: number,
): Promise<OutlookName | null> {
  const row = await namesOf(read, siteId)
    .andWhere('outlook.issuedAt <= :at', { at })
    .orderBy('outlook.issuedAt', 'DESC')
    .addOrderBy('outlook.rowid', 'DESC')
    .getOne();
  return row && toName(row);
}

/** The neighbours in time of an outlook. */
export async function readNeighbours(
  read: EntityManager,
  siteId: string,
  { id, issuedAt }: Pick<OutlookRow, 'id' | 'issuedAt'>,
): Promise<{ earlier: OutlookName | null; later: OutlookName | null }> {
  // Two may be issued within one second: rows are numbered as they are stored.
  const place = '(SELECT rowid FROM outlook WHERE id = :id)';
  const earlier = await namesOf(read, siteId)
    .andWhere(`(outlook.issuedAt < :issuedAt OR (outlook.issuedAt = :issuedAt AND outlook.rowid < ${place}))`, {
      issuedAt,
      id,
    })
    .orderBy('outlook.issuedAt', 'DESC')
    .addOrderBy('outlook.rowid', 'DESC')
    .getOne();
  const later = await namesOf(read, siteId)
    .andWhere(`(outlook.issuedAt > :issuedAt OR (outlook.issuedAt = :issuedAt AND outlook.rowid > ${place}))`, {
      issuedAt,
      id,
    })
    .orderBy('outlook.issuedAt', 'ASC')
    .addOrderBy('outlook.rowid', 'ASC')
    .getOne();
  return { earlier: earlier && toName(earlier), later: later && toName(later) };
}
