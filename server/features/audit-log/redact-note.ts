import { In, type EntityTarget, type ObjectLiteral } from 'typeorm';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Acknowledgement } from '../../entities/Acknowledgement.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../entities/AuditEvent.ts';
import { AuditNote } from '../../entities/AuditNote.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { Site } from '../../entities/Site.ts';
import { StaffedBedPlan } from '../../entities/StaffedBedPlan.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { badInput, conflict, notFound } from '../../errors.ts';
import { recordAudit, type AuditSource } from '../../http/audit.ts';

/** What stands at the record in place of the text. */
export const takenOut = 'Text taken out';

/** A record that keeps a copy of a note: the event's subject, or (with a column of time) every row written with the event. */
interface Holder {
  entity: EntityTarget<ObjectLiteral>;
  column: string;
  writtenAt?: string;
}

/** The records that keep a copy of the note typed with an event, by the event's name. */
const holders: Partial<Record<string, Holder[]>> = {
  'risk.acknowledged': [{ entity: Acknowledgement, column: 'note' }],
  'staffed-beds.changed-now': [{ entity: BedChange, column: 'reason' }],
  'staffed-beds.exception-added': [{ entity: BedChange, column: 'reason' }],
  'staffed-beds.plan-saved': [{ entity: StaffedBedPlan, column: 'reason' }],
  'scenario.adopted': [
    { entity: BedChange, column: 'reason', writtenAt: 'madeAt' },
    { entity: StaffedBedPlan, column: 'reason', writtenAt: 'savedAt' },
  ],
  'visit-log.withdrawn': [{ entity: VisitLog, column: 'reason' }],
  'exposure-gap.declared': [{ entity: ExposureGapRow, column: 'reason' }],
  'arrival-model.approved': [{ entity: ArrivalModelRow, column: 'reason' }],
  'arrival-model.retired': [{ entity: ArrivalModelRow, column: 'reason' }],
};

/**
 * Takes a note's text out of the trail and of the record that it was typed for. The event stays, and its
 * digest too, so that the chain stays whole; a further event says who took it out and why.
 * @param siteId only a note of this site; null: of any
 */
export async function redactNote(
  { database }: Pick<Dependencies, 'database'>,
  context: AuditSource,
  siteId: string | null,
  eventId: number,
  reason: string,
): Promise<void> {
  const kind = screenNote(reason);
  if (kind !== null) {
    throw badInput('The reason was refused.', [
      { at: 'reason', message: `This looks like ${withArticle(kind)}. Say why without repeating it.` },
    ]);
  }
  await database.write(async (manager) => {
    const event = await manager.findOneBy(AuditEvent, { id: eventId, ...(siteId === null ? {} : { siteId }) });
    if (!event) throw notFound('This event');
    const note = await manager.findOneBy(AuditNote, { eventId });
    if (!note) throw conflict('No note was typed with this event.', 'Nothing more to do.');
    if (note.redactedAt !== null) throw conflict('The text was taken out before.', 'Nothing more to do.');
    const by = context.caller?.person.name ?? '';
    const gone = { salt: null, text: null, redactedAt: context.now, redactedBy: by };
    await manager.update(AuditNote, { eventId }, gone);
    // What one press did may stand as several events, each with the note.
    const { siteId: at, requestId } = event;
    const siblings =
      requestId === null || at === null
        ? []
        : await manager.findBy(AuditEvent, { siteId: at, requestId, at: event.at });
    if (note.text !== null && siblings.length > 0) {
      await manager.update(AuditNote, { eventId: In(siblings.map(({ id }) => id)), text: note.text }, gone);
    }
    for (const { entity, column, writtenAt } of holders[event.event] ?? []) {
      // A note typed later at the same record stays.
      const of = writtenAt === undefined ? 'id = :subject' : `"siteId" = :siteId AND "${writtenAt}" = :at`;
      await manager
        .createQueryBuilder()
        .update(entity)
        .set({ [column]: takenOut })
        .where(`${of} AND "${column}" = :text`, {
          ...{ subject: event.subject, siteId: event.siteId, at: event.at, text: note.text },
        })
        .execute();
    }
    const site = event.siteId === null ? null : await manager.findOneBy(Site, { id: event.siteId });
    await recordAudit(manager, { ...context, site }, 'audit-note.taken-out', String(eventId), {}, reason);
  });
}
