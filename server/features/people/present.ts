import { In, MoreThan, type EntityManager } from 'typeorm';
import type { GroupRole as GroupRoleReply, PersonReply } from '../../../shared/api/people.ts';
import { GroupRole } from '../../entities/GroupRole.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Membership } from '../../entities/Membership.ts';
import type { Person } from '../../entities/Person.ts';
import { SessionRow } from '../../entities/SessionRow.ts';
import { Site } from '../../entities/Site.ts';
import { identityGroupsOf } from '../../http/caller.ts';
import type { Place } from './check-place.ts';

/** Names of every place where a role can hold. */
export async function readPlaces(read: EntityManager) {
  const sites = await read.find(Site, { order: { name: 'ASC' } });
  const groups = await read.find(HealthGroup, { order: { name: 'ASC' } });
  const siteNames = new Map(sites.map(({ id, name }) => [id, name]));
  const groupNames = new Map(groups.map(({ id, name }) => [id, name]));
  return {
    sites: sites.map(({ id, name, timeZone }) => ({ id, name, timeZone })),
    groups: groups.map(({ id, name }) => ({ id, name })),
    nameOf({ siteId, groupId }: Place): string {
      if (siteId !== null) return siteNames.get(siteId) ?? siteId;
      if (groupId !== null) return `All sites of ${groupNames.get(groupId) ?? groupId}`;
      return 'The installation';
    },
  };
}
export type Places = Awaited<ReturnType<typeof readPlaces>>;

export function presentGroupRole(row: GroupRole, places: Places): GroupRoleReply {
  const { id, claim, role, siteId, groupId, createdBy, createdAt } = row;
  return { id, claim, role, siteId, groupId, placeName: places.nameOf(row), createdBy, createdAt };
}

/** People with what they hold now and held before. */
export async function presentPeople(
  read: EntityManager,
  people: readonly Person[],
  places: Places,
  now: number,
): Promise<PersonReply[]> {
  const ids = people.map(({ id }) => id);
  const memberships = await read.find(Membership, {
    where: { personId: In(ids) },
    order: { createdAt: 'ASC', id: 'ASC' },
  });
  const groupRoles = await read.find(GroupRole, { order: { claim: 'ASC' } });
  const sessions = await read.find(SessionRow, {
    where: { personId: In(ids), expiresAt: MoreThan(now) },
    select: { sid: true, personId: true },
  });
  return people.map((person) => {
    const identityGroups = identityGroupsOf(person);
    return {
      id: person.id,
      name: person.name,
      email: person.email,
      emailVerified: person.emailVerified === 1,
      lastSignInAt: person.lastSignInAt,
      roles: memberships
        .filter(({ personId }) => personId === person.id)
        .map((membership) => {
          const { id, role, siteId, groupId, endsAt } = membership;
          const ended = endsAt !== null && endsAt <= now;
          return { id, role, siteId, groupId, placeName: places.nameOf(membership), endsAt, ended };
        }),
      byGroups: groupRoles
        .filter(({ claim }) => identityGroups.includes(claim))
        .map((row) => presentGroupRole(row, places)),
      identityGroups,
      sessions: sessions.filter(({ personId }) => personId === person.id).length,
    };
  });
}
