import { IsNull, type EntityManager } from 'typeorm';
import { newId } from '../../database/new-id.ts';
import { Membership } from '../../entities/Membership.ts';
import { Person } from '../../entities/Person.ts';

/** What the identity provider says of somebody. */
export interface Claims {
  issuer: string;
  subject: string;
  name: string;
  email: string;
  emailVerified: boolean;
  /** Groups that the provider puts the person into. */
  groups: string[];
}

/**
 * Finds or makes the person that the provider names. People are known by issuer and subject; a person
 * whom an administrator named by address is bound at the first sign-in with that address, only if the
 * provider has verified it. Somebody who was here before takes the roles of the invitation over.
 */
export async function recognisePerson(manager: EntityManager, claims: Claims, now: number): Promise<Person> {
  const email = claims.email.toLowerCase();
  const known = await manager.findOneBy(Person, { issuer: claims.issuer, subject: claims.subject });
  const invited =
    claims.emailVerified && email !== '' ? await manager.findOneBy(Person, { email, issuer: IsNull() }) : null;
  const person = known ?? invited ?? manager.create(Person, { id: newId(), createdAt: now });
  Object.assign(person, {
    issuer: claims.issuer,
    subject: claims.subject,
    name: claims.name,
    email,
    emailVerified: claims.emailVerified ? 1 : 0,
    identityGroups: JSON.stringify(claims.groups),
    lastSignInAt: now,
  });
  const saved = await manager.save(person);
  if (known && invited) {
    await manager.update(Membership, { personId: invited.id }, { personId: known.id });
    await manager.delete(Person, { id: invited.id });
  }
  return saved;
}

const most = 200;

/** The groups claim as a list of names; anything else in it is left out. */
export function readGroups(claim: unknown): string[] {
  const given: unknown[] = Array.isArray(claim) ? claim : typeof claim === 'string' ? [claim] : [];
  return given
    .filter((name) => typeof name === 'string' && name !== '' && name.length <= 200)
    .slice(0, most) as string[];
}
