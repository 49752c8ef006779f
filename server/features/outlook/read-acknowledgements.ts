import type { EntityManager } from 'typeorm';
import type { Acknowledgement as Reply } from '../../../shared/api/acknowledgements.ts';
import { Acknowledgement } from '../../entities/Acknowledgement.ts';

/** Acknowledgements of a site made in [from, to), oldest first. */
export function readAcknowledgementsMade(
  read: EntityManager,
  siteId: string,
  from: number,
  to: number,
): Promise<Acknowledgement[]> {
  return read
    .createQueryBuilder(Acknowledgement, 'acknowledgement')
    .where('acknowledgement.siteId = :siteId AND acknowledgement.at >= :from AND acknowledgement.at < :to', {
      siteId,
      from,
      to,
    })
    .orderBy('acknowledgement.at', 'ASC')
    .addOrderBy('acknowledgement.rowid', 'ASC')
    .getMany();
}

/** Acknowledgements of a site whose last hour lies at or after an instant, oldest first. */
export function readAcknowledgementsOf(read: EntityManager, siteId: string, after: number): Promise<Acknowledgement[]> {
  return read
    .createQueryBuilder(Acknowledgement, 'acknowledgement')
    .where('acknowledgement.siteId = :siteId AND acknowledgement.untilAt >= :after', { siteId, after })
    .orderBy('acknowledgement.at', 'ASC')
    .addOrderBy('acknowledgement.rowid', 'ASC')
    .getMany();
}

/** An acknowledgement as it leaves the server. */
export function presentAcknowledgement(row: Acknowledgement): Reply {
  const { id, areaId, outlookId, fromAt, untilAt, note, by, at } = row;
  return { id, areaId, outlookId, fromAt, untilAt, hours: JSON.parse(row.hours) as number[], note, by, at };
}
