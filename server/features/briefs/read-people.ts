import type { EntityManager } from 'typeorm';
import { isGranted } from '../../../shared/domain/permission.ts';
import type { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { Membership } from '../../entities/Membership.ts';
import type { Site } from '../../entities/Site.ts';

/** People who hold a role of their own that reads briefs here and do not receive them yet, by name. */
export async function readPeopleToAdd(
  read: EntityManager,
  site: Site,
  recipients: readonly BriefRecipient[],
  now: number,
): Promise<{ name: string; address: string }[]> {
  const held = await read.find(Membership, {
    where: [{ siteId: site.id }, { groupId: site.groupId }],
    relations: { person: true },
  });
  const taken = new Set(recipients.map(({ address }) => address));
  const people = new Map<string, { name: string; address: string }>();
  for (const { role, endsAt, person } of held) {
    if ((endsAt !== null && endsAt <= now) || !isGranted([role], 'brief:read') || taken.has(person.email)) continue;
    people.set(person.id, { name: person.name, address: person.email });
  }
  return [...people.values()].sort((a, b) => a.name.localeCompare(b.name));
}
