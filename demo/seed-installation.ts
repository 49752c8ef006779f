import { newId } from '../server/database/new-id.ts';
import type { Database } from '../server/database/database.ts';
import { CalendarEntry } from '../server/entities/CalendarEntry.ts';
import { CareArea } from '../server/entities/CareArea.ts';
import { ExposureGapRow } from '../server/entities/ExposureGapRow.ts';
import { HealthGroup } from '../server/entities/HealthGroup.ts';
import { Membership } from '../server/entities/Membership.ts';
import { Person } from '../server/entities/Person.ts';
import { Shift } from '../server/entities/Shift.ts';
import { Site } from '../server/entities/Site.ts';
import { localDate, makeZone } from '../shared/domain/zoned-time.ts';
import { demoAccounts } from './farrowmere-accounts.ts';
import { calendarDays, outages } from './farrowmere-calendar.ts';
import { demoSites, onCallAddresses } from './farrowmere.ts';

/** True once the demo's sites are there. */
export async function isSeeded(database: Database): Promise<boolean> {
  return database.read.existsBy(Site, { id: demoSites[0].id });
}

/**
 * Puts the invented group into an empty installation: sites, areas, shifts, people named by address (the
 * first sign-in binds them) with their roles, the fair, and the declared outage. What people do with the
 * product (logs, plan, model, census) is done through the product afterwards.
 */
export async function seedInstallation(database: Database, from: number, now: number): Promise<void> {
  await database.write(async (manager) => {
    const group = await manager.save(manager.create(HealthGroup, { id: 'farrowmere', name: 'Farrowmere' }));
    for (const site of demoSites) {
      await manager.insert(Site, {
        id: site.id,
        groupId: group.id,
        name: site.name,
        timeZone: site.timeZone,
        country: site.country,
        region: site.region,
        planningRisk: site.planningRisk,
        bedMeetingMinutes: site.bedMeetingMinutes,
        waitLimitMinutes: site.waitLimitMinutes,
        onCallAddress: onCallAddresses[site.id] ?? null,
        stayCapHours: 72,
        smallNumberMinimum: 5,
      });
      await manager.insert(
        CareArea,
        site.areas.map((area, index) => ({ ...area, siteId: site.id, code: index, position: index })),
      );
      await manager.insert(
        Shift,
        site.shifts.map((shift) => ({ ...shift, id: `${site.id}-${shift.id}`.slice(0, 64), siteId: site.id })),
      );
      const zone = makeZone(site.timeZone);
      const days = calendarDays(site.id, localDate(zone.toLocal(from)), localDate(zone.toLocal(now + 366 * 86_400)));
      for (const { date, kind, name, statedEffect } of days) {
        if (kind === 'public holiday') continue;
        await manager.insert(CalendarEntry, { id: newId(), siteId: site.id, date, kind, name, statedEffect });
      }
      for (const gap of outages(site.id, zone, from, now)) {
        await manager.insert(ExposureGapRow, {
          id: newId(),
          siteId: site.id,
          areaId: null,
          fromAt: gap.from,
          untilAt: gap.to,
          reason: 'The patient system was down for an upgrade; nothing was recorded.',
        });
      }
    }
    for (const account of demoAccounts) {
      const person = await manager.save(
        manager.create(Person, {
          id: newId(),
          issuer: null,
          subject: null,
          name: account.name,
          email: account.email,
          createdAt: now,
          lastSignInAt: null,
        }),
      );
      const held = [
        ...account.siteRoles.map(({ siteId, role }) => ({ siteId, role })),
        ...account.installationRoles.map((role) => ({ siteId: null, role })),
      ];
      for (const { siteId, role } of held) {
        await manager.insert(Membership, {
          id: newId(),
          personId: person.id,
          role,
          siteId,
          groupId: null,
          endsAt: null,
          createdAt: now,
        });
      }
    }
  });
}
