import { In, type EntityManager } from 'typeorm';
import { permissionsOf, type Permission, type Role } from '../../shared/domain/permission.ts';
import { GroupRole } from '../entities/GroupRole.ts';
import { Membership } from '../entities/Membership.ts';
import { Person } from '../entities/Person.ts';
import { Site } from '../entities/Site.ts';

/** A signed-in person with the roles that they hold now, by name and by the groups of the identity provider. Read anew at every request, so that a removed role is gone at once. */
export interface Caller {
  person: Person;
  /** Roles at each site, by site id; a role over a health group stands at each of its sites. */
  rolesAt: Map<string, Role[]>;
  installationRoles: Role[];
}

/** Reads who a person is now; null if there is no such person. */
export async function readCaller(read: EntityManager, personId: string, now: number): Promise<Caller | null> {
  const person = await read.findOneBy(Person, { id: personId });
  if (!person) return null;
  const memberships = (await read.findBy(Membership, { personId })).filter(
    (membership) => membership.endsAt === null || membership.endsAt > now,
  );
  const rolesAt = new Map<string, Role[]>();
  const installationRoles: Role[] = [];
  const give = (siteId: string, role: Role) => {
    const held = rolesAt.get(siteId);
    if (!held) rolesAt.set(siteId, [role]);
    else if (!held.includes(role)) held.push(role);
  };
  const claims = identityGroupsOf(person);
  const byGroups = claims.length === 0 ? [] : await read.findBy(GroupRole, { claim: In(claims) });
  for (const { role, siteId, groupId } of [...memberships, ...byGroups]) {
    if (role === 'administrator') {
      if (!installationRoles.includes(role)) installationRoles.push(role);
    } else if (siteId !== null) give(siteId, role);
    else if (groupId !== null) {
      for (const site of await read.find(Site, { where: { groupId }, select: { id: true } })) give(site.id, role);
    }
  }
  return { person, rolesAt, installationRoles };
}

/** The groups that the identity provider put a person into at the last sign-in. */
export function identityGroupsOf(person: Person): string[] {
  return JSON.parse(person.identityGroups) as string[];
}

/** What the caller may do at a site; nothing where no role is held. */
export function permissionsAt(caller: Caller, siteId: string): Permission[] {
  return permissionsOf(caller.rolesAt.get(siteId) ?? []);
}
