import { readDataDir } from '../config.ts';
import { openDatabase } from '../database/database.ts';
import { newId } from '../database/new-id.ts';
import { Membership } from '../entities/Membership.ts';
import { Person } from '../entities/Person.ts';
import { recordOwnAudit } from '../http/audit.ts';

/**
 * `npm run grant-admin -- ADDRESS`: makes the person with this e-mail address an administrator. Somebody
 * who has not signed in yet is bound at the first sign-in, if the identity provider has verified the address.
 */
const address = process.argv[2]?.trim().toLowerCase();
if (address === undefined || !/^[^\s@]+@[^\s@]+$/.test(address)) {
  process.stderr.write('Usage: npm run grant-admin -- ADDRESS (an e-mail address)\n');
  process.exit(2);
}
const database = await openDatabase(readDataDir(process.env));
const now = Math.floor(Date.now() / 1000);
const people = await database.read.findBy(Person, { email: address });
if (people.length > 1) {
  process.stderr.write(`${String(people.length)} people have signed in with ${address}; nothing was changed.\n`);
  process.exit(1);
}
const outcome = await database.write(async (manager) => {
  const person =
    people.at(0) ??
    (await manager.save(
      manager.create(Person, {
        id: newId(),
        issuer: null,
        subject: null,
        name: address,
        email: address,
        createdAt: now,
        lastSignInAt: null,
      }),
    ));
  const held = await manager.findBy(Membership, { personId: person.id, role: 'administrator' });
  if (held.some((membership) => membership.endsAt === null || membership.endsAt > now))
    return 'is an administrator already';
  const id = newId();
  await manager.insert(Membership, {
    id,
    personId: person.id,
    role: 'administrator',
    siteId: null,
    groupId: null,
    endsAt: null,
    createdAt: now,
  });
  await recordOwnAudit(manager, {
    at: now,
    actor: 'command line',
    siteId: null,
    event: 'role.granted',
    subject: id,
    detail: { role: 'administrator', personId: person.id },
  });
  return people.length > 0 ? 'is now an administrator' : 'will be an administrator from the first sign-in';
});
await database.close();
process.stdout.write(`${address} ${outcome}.\n`);
