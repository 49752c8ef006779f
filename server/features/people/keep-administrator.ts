import { IsNull, Not, type EntityManager } from 'typeorm';
import { Membership } from '../../entities/Membership.ts';
import { conflict } from '../../errors.ts';

/**
 * Refuses to end the role of the last administrator. Another one counts only if the role has no end and the
 * person has signed in: an invitation to a mistyped address, or a group of the provider, lets nobody in.
 */
export async function keepAnAdministrator(manager: EntityManager, ending: Membership): Promise<void> {
  if (ending.role !== 'administrator') return;
  const another = await manager.exists(Membership, {
    where: { role: 'administrator', endsAt: IsNull(), id: Not(ending.id), person: { issuer: Not(IsNull()) } },
    relations: { person: true },
  });
  if (another) return;
  throw conflict(
    'This is the last administrator who has signed in and whose role has no end.',
    'Give the role to somebody else first and let them sign in once.',
  );
}
