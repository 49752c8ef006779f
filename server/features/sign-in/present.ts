import { In } from 'typeorm';
import type { Session } from '../../../shared/api/session.ts';
import { permissionsOf } from '../../../shared/domain/permission.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { antiForgeryToken } from '../../http/anti-forgery.ts';
import { permissionsAt, type Caller } from '../../http/caller.ts';

/** Who is signed in, as the client is told. */
export async function presentSession(
  deps: Dependencies,
  caller: Caller | null,
  { sessionId, locked }: { sessionId: string; locked: boolean },
  now: number,
): Promise<Session> {
  const { config, database } = deps;
  const sites = caller
    ? await database.read.find(Site, {
        where: { id: In([...caller.rolesAt.keys()]) },
        relations: { group: true },
        order: { name: 'ASC' },
      })
    : [];
  return {
    person: caller ? { id: caller.person.id, name: caller.person.name, email: caller.person.email } : null,
    sites: caller
      ? sites.map((site) => ({
          id: site.id,
          name: site.name,
          groupName: site.group.name,
          timeZone: site.timeZone,
          roles: caller.rolesAt.get(site.id) ?? [],
          permissions: permissionsAt(caller, site.id),
        }))
      : [],
    locked,
    idleSeconds: config.idleMinutes * 60,
    installationRoles: caller?.installationRoles ?? [],
    installationPermissions: permissionsOf(caller?.installationRoles ?? []),
    administratorContact: config.administratorContact,
    csrfToken: antiForgeryToken(config.sessionSecret, sessionId),
    now,
  };
}
