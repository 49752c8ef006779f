import { IsNull, type EntityManager } from 'typeorm';
import { newId } from '../../database/new-id.ts';
import { Person } from '../../entities/Person.ts';

/** What the identity provider says of somebody. */
export interface Claims {
  issuer: string;
  subject: string;
  name: string;
  email: string;
  emailVerified: boolean;
}

/**
 * Finds or makes the person that the provider names. People are known by issuer and subject; a person
 * whom an administrator named by address is bound at the first sign-in, only if the provider has
 * verified the address.
 */
export async function recognisePerson(manager: EntityManager, claims: Claims, now: number): Promise<Person> {
  const email = claims.email.toLowerCase();
  const known = await manager.findOneBy(Person, { issuer: claims.issuer, subject: claims.subject });
  const invited =
    known ??
    (claims.emailVerified && email !== '' ? await manager.findOneBy(Person, { email, issuer: IsNull() }) : null);
  const person = invited ?? manager.create(Person, { id: newId(), createdAt: now });
  Object.assign(person, {
    issuer: claims.issuer,
    subject: claims.subject,
    name: claims.name,
    email,
    lastSignInAt: now,
  });
  return manager.save(person);
}
