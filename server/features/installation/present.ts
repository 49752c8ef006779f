import { In, type EntityManager } from 'typeorm';
import type { InstallationSite } from '../../../shared/api/installation.ts';
import { readAreas } from '../../database/read-site.ts';
import { Membership } from '../../entities/Membership.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { notFound } from '../../errors.ts';

/** True once anything stands on the site's local time. */
export async function hasData(read: EntityManager, siteId: string): Promise<boolean> {
  return (await read.existsBy(VisitLog, { siteId })) || (await read.existsBy(OutlookRow, { siteId }));
}

/** A site as its administrator sees it. 404 if there is none. */
export async function presentSite(read: EntityManager, siteId: string, now: number): Promise<InstallationSite> {
  const site = await read.findOne(Site, { where: { id: siteId }, relations: { group: true } });
  if (!site) throw notFound('This site');
  const areas = await readAreas(read, site.id);
  const held = (await read.findBy(Membership, [{ siteId: site.id }, { groupId: In([site.groupId]) }])).filter(
    ({ endsAt }) => endsAt === null || endsAt > now,
  );
  const { id, name, groupId, timeZone, country, region } = site;
  return {
    ...{ id, name, groupId, timeZone, country, region, groupName: site.group.name },
    areas: areas.map((area) => ({
      id: area.id,
      name: area.name,
      spaceKind: area.spaceKind,
      spaces: area.spaces,
      safeMinimum: area.safeMinimum,
      bedStep: area.bedStep,
      noticeHours: area.noticeHours,
    })),
    hasData: await hasData(read, site.id),
    people: new Set(held.map(({ personId }) => personId)).size,
    hasOperations: held.some(({ role }) => role === 'operations'),
  };
}
