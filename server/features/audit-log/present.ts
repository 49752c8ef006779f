import type { AuditEventReply } from '../../../shared/api/audit-log.ts';
import type { EventWithNote } from './read-events.ts';

/** @param withText notes belong to the people of the site; the administrator sees only that one is there */
export function presentEvent(
  { event, note }: EventWithNote,
  siteNames: ReadonlyMap<string, string>,
  withText: boolean,
): AuditEventReply {
  const { id, at, actor, siteId, subject, address, requestId } = event;
  return {
    id,
    at,
    actor,
    siteId,
    siteName: siteId === null ? null : (siteNames.get(siteId) ?? null),
    event: event.event,
    subject,
    detail: JSON.parse(event.detail) as Record<string, unknown>,
    address,
    requestId,
    note:
      note === null
        ? { state: 'none' }
        : note.redactedAt === null
          ? { state: 'kept', text: withText ? note.text : null }
          : { state: 'taken out', at: note.redactedAt, by: note.redactedBy ?? '' },
  };
}
