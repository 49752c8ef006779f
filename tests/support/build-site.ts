import type { Role } from '../../shared/domain/permission.ts';
import type { Database } from '../../server/database/database.ts';
import { newId } from '../../server/database/new-id.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';
import { Membership } from '../../server/entities/Membership.ts';
import { Person } from '../../server/entities/Person.ts';
import { Shift } from '../../server/entities/Shift.ts';
import { Site } from '../../server/entities/Site.ts';

export interface BuiltSite {
  site: Site;
  areas: CareArea[];
}

/** A site with two care areas (Acute: 20 spaces; Resuscitation: 4) and three shifts. */
export async function buildSite(database: Database, more: Partial<Site> = {}): Promise<BuiltSite> {
  return database.write(async (manager) => {
    const group = await manager.save(manager.create(HealthGroup, { id: newId(), name: 'Test group' }));
    const site = await manager.save(
      manager.create(Site, {
        id: newId(),
        groupId: group.id,
        name: 'Test site',
        timeZone: 'Europe/London',
        country: 'GB',
        region: 'ENG',
        planningRisk: 0.1,
        stayCapHours: 72,
        smallNumberMinimum: 5,
        ...more,
      }),
    );
    const area = (code: number, name: string, spaces: number, safeMinimum: number) =>
      manager.create(CareArea, {
        id: newId(),
        siteId: site.id,
        code,
        name,
        position: code,
        spaceKind: 'bed',
        spaces,
        safeMinimum,
        bedStep: 1,
        noticeHours: 2,
        alertLimit: 0.25,
        escalationNote: 'Call the site manager.',
      });
    const areas = await manager.save([area(0, 'Acute', 20, 8), area(1, 'Resuscitation', 4, 2)]);
    const shift = (name: string, startMinute: number, endMinute: number) =>
      manager.create(Shift, { id: newId(), siteId: site.id, name, startMinute, endMinute });
    await manager.save([shift('Early', 420, 870), shift('Late', 840, 1290), shift('Night', 1260, 450)]);
    return { site, areas };
  });
}

/** A person with roles at a site; `administrator` is held for the installation. */
export async function buildPerson(
  database: Database,
  roles: { role: Role; siteId?: string; groupId?: string; endsAt?: number }[] = [],
  name = 'Test Person',
): Promise<Person> {
  return database.write(async (manager) => {
    const id = newId();
    const person = await manager.save(
      manager.create(Person, {
        id,
        issuer: 'https://issuer.test',
        subject: id,
        name,
        email: `${id.toLowerCase()}@people.test`,
        createdAt: 1,
        lastSignInAt: 1,
      }),
    );
    for (const { role, siteId = null, groupId = null, endsAt = null } of roles) {
      await manager.insert(Membership, { id: newId(), personId: id, role, siteId, groupId, endsAt, createdAt: 1 });
    }
    return person;
  });
}
