import type { EntityManager } from 'typeorm';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Brief } from '../../entities/Brief.ts';
import { BriefDelivery } from '../../entities/BriefDelivery.ts';
import type { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { readActiveRecipients } from './brief-recipients.ts';

export const sendJobKind = 'brief.send';

/** With the pauses between them about ten hours of trying. */
const attempts = 64;
/** How a delivery is named in the database before its first attempt; its Message-ID never changes after. */
export function newDelivery(
  brief: Pick<Brief, 'id'>,
  to: Pick<BriefRecipient, 'name' | 'address'>,
  recipientId: string | null,
  position: number,
): BriefDelivery {
  const id = newId();
  return Object.assign(new BriefDelivery(), {
    id,
    briefId: brief.id,
    recipientId,
    position,
    name: to.name,
    address: to.address,
    messageId: `brief-${id}`,
    state: 'waiting',
    attempts: 0,
    attemptedAt: null,
    sentAt: null,
    lastAnswer: null,
    returnedAt: null,
    returnedBecause: null,
  });
}

/**
 * Puts a brief on its way to everybody who receives it now, within the caller's transaction. Who is added later gets the next one.
 * @returns how many it goes to; with 0 nothing was done
 */
export async function putOnItsWay(
  { jobs }: Pick<Dependencies, 'jobs'>,
  manager: EntityManager,
  brief: Pick<Brief, 'id' | 'siteId' | 'subject'>,
  createdBy: string,
): Promise<number> {
  const recipients = await readActiveRecipients(manager, brief.siteId);
  if (recipients.length === 0) return 0;
  const rows = recipients.map((recipient, index) => newDelivery(brief, recipient, recipient.id, index));
  for (let at = 0; at < rows.length; at += 50) await manager.insert(BriefDelivery, rows.slice(at, at + 50));
  await manager.update(Brief, { id: brief.id }, { state: 'sending' });
  await enqueueSending({ jobs }, manager, brief, createdBy);
  return rows.length;
}

/** Queues the sending of all that waits of a brief, or of one delivery alone (a test). */
export function enqueueSending(
  { jobs }: Pick<Dependencies, 'jobs'>,
  manager: EntityManager,
  brief: Pick<Brief, 'id' | 'siteId'>,
  createdBy: string,
  deliveryId: string | null = null,
): Promise<string> {
  return jobs.enqueue(manager, {
    kind: sendJobKind,
    title: deliveryId === null ? 'Send the weekly brief to its recipients' : 'Send a test of the weekly brief',
    siteId: brief.siteId,
    payload: { briefId: brief.id, deliveryId },
    createdBy,
    maxAttempts: attempts,
  });
}
