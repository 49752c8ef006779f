import { IsNull, Not, type EntityManager } from 'typeorm';
import { isGranted } from '../../../shared/domain/permission.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { readCaller } from '../../http/caller.ts';

/** Recipients that a brief goes to now, in the order in which they were added. */
export function readActiveRecipients(manager: EntityManager, siteId: string): Promise<BriefRecipient[]> {
  return manager.find(BriefRecipient, {
    where: { siteId, confirmedAt: Not(IsNull()), unsubscribedAt: IsNull(), removedAt: IsNull() },
    order: { addedAt: 'ASC', id: 'ASC' },
  });
}

/**
 * Why a recipient gets nothing now; null if it may be sent.
 * @param siteIds every site that the brief tells of: a person must be allowed to read the briefs of each
 */
export async function whyLeftOut(
  manager: EntityManager,
  recipientId: string,
  siteIds: readonly string[],
  now: number,
): Promise<string | null> {
  const recipient = await manager.findOneBy(BriefRecipient, { id: recipientId });
  if (!recipient || recipient.removedAt !== null) return 'Removed from the recipients before it was sent.';
  if (recipient.unsubscribedAt !== null) return 'Unsubscribed before it was sent.';
  if (recipient.confirmedAt === null) return 'The address has not confirmed.';
  if (recipient.returnedAt !== null) return 'Mail to this address came back, and nobody has confirmed it since.';
  if (recipient.personId === null) return null;
  const caller = await readCaller(manager, recipient.personId, now);
  const mayRead = siteIds.every((siteId) => isGranted(caller?.rolesAt.get(siteId) ?? [], 'brief:read'));
  if (mayRead) return null;
  return siteIds.length === 1
    ? 'Holds no role at the site that reads briefs.'
    : 'Does not hold a role that reads briefs at every site told of.';
}
