import { In, type EntityManager } from 'typeorm';
import { AuditEvent } from '../../entities/AuditEvent.ts';
import { AuditNote } from '../../entities/AuditNote.ts';

export interface AuditFilter {
  siteId?: string | undefined;
  event?: string | undefined;
  actor?: string | undefined;
  from?: number | undefined;
  until?: number | undefined;
}

export interface EventWithNote {
  event: AuditEvent;
  note: AuditNote | null;
}

/** Rows that fit, newest first, from before a row on. */
export async function readEvents(
  read: EntityManager,
  { siteId, event, actor, from, until }: AuditFilter,
  before: number | undefined,
  take: number,
): Promise<EventWithNote[]> {
  const query = read.createQueryBuilder(AuditEvent, 'event').orderBy('event.id', 'DESC').limit(take);
  if (before !== undefined) query.andWhere('event.id < :before', { before });
  if (siteId !== undefined) query.andWhere('event.siteId = :siteId', { siteId });
  if (event) query.andWhere("(event.event = :event OR event.event LIKE :event || '.%')", { event });
  // A name may hold the signs that LIKE reads as any text.
  if (actor) query.andWhere('instr(lower(event.actor), lower(:actor)) > 0', { actor });
  if (from !== undefined) query.andWhere('event.at >= :from', { from });
  if (until !== undefined) query.andWhere('event.at < :until', { until });
  const events = await query.getMany();
  const notes = await read.findBy(AuditNote, {
    eventId: In(events.filter(({ noteHash }) => noteHash !== null).map(({ id }) => id)),
  });
  const byEvent = new Map(notes.map((note) => [note.eventId, note]));
  return events.map((row) => ({ event: row, note: byEvent.get(row.id) ?? null }));
}
