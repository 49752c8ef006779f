import type { Express } from 'express';
import * as api from '../../../shared/api/installation.ts';
import { holidayCountries } from '../../database/holiday-regions.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Shift } from '../../entities/Shift.ts';
import { Site } from '../../entities/Site.ts';
import { badInput, conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addRoute, type RouteContext, type RouteTable } from '../../http/route.ts';
import { checkSite, timeZones } from './check-site.ts';
import { hasData, presentSite } from './present.ts';
import { deleteArea, insertArea, setAreaOrder, updateArea } from './save-area.ts';

/** What a site begins with, so that Tonight has a shift to speak of; common practice, no source. */
const firstShifts = [
  { name: 'Day', startMinute: 7 * 60, endMinute: 19 * 60 + 30 },
  { name: 'Night', startMinute: 19 * 60, endMinute: 7 * 60 + 30 },
];

/**
 * Groups, sites and care areas; the administrator's. What a site decides for itself (shifts, limits, plan) is its
 * operations manager's.
 * @param onChanged after a change that may move the outlook
 */
export function addInstallationRoutes(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  onChanged: (siteId: string) => Promise<void>,
): void {
  const { read, write } = deps.database;

  addRoute(app, table, deps, api.listInstallationSites, async ({ now }) => {
    const groups = await read.find(HealthGroup, { order: { name: 'ASC' } });
    const sites = await read.find(Site, { select: { id: true }, order: { name: 'ASC' } });
    return {
      groups: groups.map(({ id, name }) => ({ id, name })),
      sites: await Promise.all(sites.map(({ id }) => presentSite(read, id, now))),
    };
  });

  addRoute(app, table, deps, api.getPlaceChoices, () =>
    Promise.resolve({ timeZones: timeZones(), countries: holidayCountries() }),
  );

  const refuseTwin = async (name: string, ownId: string | null) => {
    const twin = (await read.find(HealthGroup)).some(
      (group) => group.id !== ownId && group.name.toLowerCase() === name.toLowerCase(),
    );
    if (twin) throw badInput('The group was refused.', [{ at: 'name', message: 'Another group has this name.' }]);
  };

  addRoute(app, table, deps, api.makeGroup, async (context) => {
    const { name } = context.body;
    await refuseTwin(name, null);
    const id = newId();
    await write(async (manager) => {
      await manager.insert(HealthGroup, { id, name });
      await recordAudit(manager, context, 'site.group-made', id, { name });
    });
    return { id, name };
  });

  addRoute(app, table, deps, api.renameGroup, async (context) => {
    const { name } = context.body;
    const { groupId: id } = context.params;
    await refuseTwin(name, id);
    await write(async (manager) => {
      const group = await manager.findOneBy(HealthGroup, { id });
      if (!group) throw notFound('This group');
      await manager.update(HealthGroup, { id }, { name });
      await recordAudit(manager, context, 'site.group-renamed', id, { before: group.name, name });
    });
    return { id, name };
  });

  addRoute(app, table, deps, api.makeSite, async (context) => {
    const { areas, ...place } = context.body;
    await checkSite(read, place, null);
    const id = newId();
    await write(async (manager) => {
      const site = await manager.save(
        manager.create(Site, { id, ...place, planningRisk: 0.1, stayCapHours: 72, smallNumberMinimum: 5 }),
      );
      for (const area of areas) await insertArea(manager, id, area);
      for (const shift of firstShifts) await manager.save(manager.create(Shift, { id: newId(), siteId: id, ...shift }));
      const detail = { name: site.name, timeZone: site.timeZone, country: site.country, areas: areas.length };
      await recordAudit(manager, { ...context, site }, 'site.made', id, detail);
    });
    return presentSite(read, id, context.now);
  });

  addRoute(app, table, deps, api.changeSite, async (context) => {
    const { id } = context.params;
    const before = await read.findOneBy(Site, { id });
    if (!before) throw notFound('This site');
    await checkSite(read, context.body, id);
    if (before.timeZone !== context.body.timeZone && (await hasData(read, id))) {
      throw conflict(
        'Visit logs or outlooks stand on the site’s time zone.',
        'A site in another zone is made anew; its logs are loaded there again.',
      );
    }
    await write(async (manager) => {
      await manager.update(Site, { id }, context.body);
      const site = await manager.findOneByOrFail(Site, { id });
      const { name, timeZone, country, region } = site;
      await recordAudit(manager, { ...context, site }, 'site.changed', id, { name, timeZone, country, region });
    });
    await onChanged(id);
    return presentSite(read, id, context.now);
  });

  /** Does one change to a care area, with its audit row, and tells what depends on it. */
  async function changeArea(
    context: Pick<RouteContext, 'caller' | 'now' | 'requestId' | 'address'>,
    siteId: string,
    event: string,
    work: (manager: Parameters<Parameters<typeof write>[0]>[0]) => Promise<CareArea>,
  ) {
    await write(async (manager) => {
      const site = await manager.findOneBy(Site, { id: siteId });
      if (!site) throw notFound('This site');
      const { id, name, spaceKind, spaces, safeMinimum, bedStep, noticeHours } = await work(manager);
      const detail = { name, spaceKind, spaces, safeMinimum, bedStep, noticeHours };
      await recordAudit(manager, { ...context, site }, event, id, detail);
    });
    await onChanged(siteId);
    return presentSite(read, siteId, context.now);
  }

  addRoute(app, table, deps, api.addArea, (context) => {
    const { id } = context.params;
    return changeArea(context, id, 'area.added', (manager) => insertArea(manager, id, context.body));
  });
  addRoute(app, table, deps, api.changeArea, (context) => {
    const { id, areaId } = context.params;
    return changeArea(context, id, 'area.changed', (manager) => updateArea(manager, id, areaId, context.body));
  });
  addRoute(app, table, deps, api.removeArea, (context) => {
    const { id, areaId } = context.params;
    return changeArea(context, id, 'area.removed', (manager) => deleteArea(manager, id, areaId));
  });
  addRoute(app, table, deps, api.orderAreas, async (context) => {
    const { id } = context.params;
    await write(async (manager) => {
      const site = await manager.findOneBy(Site, { id });
      if (!site) throw notFound('This site');
      const before = (await readAreas(manager, id)).map(({ name }) => name);
      const after = (await setAreaOrder(manager, id, context.body.areaIds)).map(({ name }) => name);
      // A wish for the order that stands leaves no trace.
      if (after.join('\n') === before.join('\n')) return;
      const detail = { before: before.join(', '), order: after.join(', ') };
      await recordAudit(manager, { ...context, site }, 'area.order-changed', id, detail);
    });
    return presentSite(read, id, context.now);
  });
}
