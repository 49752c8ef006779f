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

/** The records that keep a copy of the note typed with an event, by the event's name. */
const holders = {
  'risk.acknowledged': [Acknowledgement, 'note'],
  'staffed-beds.changed-now': [BedChange, 'reason'],
  'staffed-beds.plan-saved': [StaffedBedPlan, 'reason'],
  'visit-log.withdrawn': [VisitLog, 'reason'],
  'exposure-gap.declared': [ExposureGapRow, 'reason'],
  'arrival-model.approved': [ArrivalModelRow, 'reason'],
  'arrival-model.retired': [ArrivalModelRow, 'reason'],
} as const;

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
    await manager.update(AuditNote, { eventId }, { salt: null, text: null, redactedAt: context.now, redactedBy: by });
    if (event.event in holders) {
      const [entity, column] = holders[event.event as keyof typeof holders];
      // A note typed later at the same record stays.
      await manager
        .createQueryBuilder()
        .update(entity)
        .set({ [column]: takenOut })
        .where(`id = :id AND "${column}" = :text`, { id: event.subject, text: note.text })
        .execute();
    }
    const site = event.siteId === null ? null : await manager.findOneBy(Site, { id: event.siteId });
    await recordAudit(manager, { ...context, site }, 'audit-note.taken-out', String(eventId), {}, reason);
  });
}
