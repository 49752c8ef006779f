import type { Express } from 'express';
import { getSite } from '../../../shared/api/sites.ts';
import type { Dependencies } from '../../dependencies.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';

/** What the pages need to know of a site. */
export function addSiteRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read } = deps.database;
  addSiteRoute(app, table, deps, getSite, async ({ site }) => {
    const group = await read.findOneByOrFail(HealthGroup, { id: site.groupId });
    const areas = await readAreas(read, site.id);
    const shifts = await readShifts(read, site.id);
    return {
      id: site.id,
      name: site.name,
      groupName: group.name,
      timeZone: site.timeZone,
      country: site.country,
      region: site.region,
      planningRisk: site.planningRisk,
      bedMeetingMinutes: site.bedMeetingMinutes,
      waitLimitMinutes: site.waitLimitMinutes,
      areas: areas.map(
        ({
          id,
          name,
          spaceKind,
          spaces,
          safeMinimum,
          bedStep,
          noticeHours,
          alertLimit,
          escalationNote,
          bedsPerNurse,
          lendsTo,
        }) => ({
          id,
          name,
          spaceKind,
          spaces,
          safeMinimum,
          bedStep,
          noticeHours,
          alertLimit,
          escalationNote,
          bedsPerNurse,
          lendsTo,
        }),
      ),
      shifts: shifts.map(({ id, name, startMinute, endMinute, leadTimeHours }) => ({
        id,
        name,
        startMinute,
        endMinute,
        leadTimeHours,
      })),
    };
  });
}
