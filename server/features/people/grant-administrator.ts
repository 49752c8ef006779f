import { IsNull, type EntityManager } from 'typeorm';
import type { Database } from '../../database/database.ts';
import { newId } from '../../database/new-id.ts';
import { Membership } from '../../entities/Membership.ts';
import { Person } from '../../entities/Person.ts';
import { recordOwnAudit } from '../../http/audit.ts';

export type GrantOutcome =
  | 'is an administrator already'
  | 'is now an administrator'
  | 'will be an administrator from the first sign-in with this address, once the provider has verified it';

/** Whom the command names: an address, or the identity itself as the provider gives it. */
export type Named = { email: string } | { issuer: string; subject: string };

/**
 * Makes somebody an administrator from the command line. An address names a person who is here only if the
 * provider had verified it: anybody may claim an address that nobody checks. Otherwise it becomes an
 * invitation, which binds at the first sign-in with that address verified.
 * @returns null if no such identity has signed in
 */
export async function grantAdministrator(database: Database, named: Named, now: number): Promise<GrantOutcome | null> {
  return database.write(async (manager) => {
    const found = 'email' in named ? await findByAddress(manager, named.email) : await manager.findOneBy(Person, named);
    if (!found && !('email' in named)) return null;
    const person =
      found ??
      (await manager.save(
        manager.create(Person, {
          id: newId(),
          issuer: null,
          subject: null,
          name: 'email' in named ? named.email : '',
          email: 'email' in named ? named.email : '',
          createdAt: now,
          lastSignInAt: null,
        }),
      ));
    const held = await manager.findBy(Membership, { personId: person.id, role: 'administrator' });
    if (held.some(({ endsAt }) => endsAt === null)) return 'is an administrator already';
    const id = newId();
    const place = { siteId: null, groupId: null, endsAt: null };
    await manager.insert(Membership, { id, personId: person.id, role: 'administrator', ...place, createdAt: now });
    await recordOwnAudit(manager, {
      at: now,
      actor: 'command line',
      siteId: null,
      event: 'role.given',
      subject: id,
      detail: { role: 'administrator', personId: person.id },
    });
    return person.issuer === null
      ? 'will be an administrator from the first sign-in with this address, once the provider has verified it'
      : 'is now an administrator';
  });
}

async function findByAddress(manager: EntityManager, email: string): Promise<Person | null> {
  const verified = await manager.findBy(Person, { email, emailVerified: 1 });
  if (verified.length > 1) {
    throw new RangeError(
      `${String(verified.length)} people have signed in with ${email}; name one by --issuer and --subject.`,
    );
  }
  return verified.at(0) ?? (await manager.findOneBy(Person, { email, issuer: IsNull() }));
}
