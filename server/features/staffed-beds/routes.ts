import type { Express } from 'express';
import {
  changeBedsNow as changeContract,
  getStaffedBeds,
  savePlan as saveContract,
} from '../../../shared/api/staffed-beds.ts';
import { readBedChanges, readPlan } from '../../database/read-staffed-beds.ts';
import type { Dependencies } from '../../dependencies.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { changeBedsNow } from './change-beds-now.ts';
import { savePlan } from './save-plan.ts';

/** Told when something that an outlook depends on has changed; answers with the outlook's id, or null where there is none. */
export type OnBedsChanged = (siteId: string) => Promise<string | null>;

/** The staffed-bed plan, and changes for the current and next shift. */
export function addStaffedBedRoutes(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  onChanged: OnBedsChanged,
): void {
  const { read, write } = deps.database;

  addSiteRoute(app, table, deps, getStaffedBeds, async ({ site, now }) => {
    const inForce = await readPlan(read, site.id);
    const changes = await readBedChanges(read, site.id, now);
    return {
      plan: inForce && {
        version: inForce.plan.version,
        savedAt: inForce.plan.savedAt,
        savedBy: inForce.plan.savedBy,
        reason: inForce.plan.reason,
        areas: inForce.areas.map(({ areaId, halfHours }) => ({ areaId, halfHours })),
      },
      changes: changes.map(({ id, areaId, fromAt, untilAt, beds, blocked, reason, kind, madeBy, madeAt }) => ({
        id,
        areaId,
        fromAt,
        untilAt,
        beds,
        blocked,
        reason,
        kind,
        madeBy,
        madeAt,
      })),
    };
  });

  addSiteRoute(app, table, deps, saveContract, async (context) => {
    const { site, caller, body, now } = context;
    const plan = await write(async (manager) => {
      const saved = await savePlan(manager, site.id, body, caller.person.name, now);
      await recordAudit(manager, context, 'staffed-beds.plan-saved', saved.id, { version: saved.version });
      return saved;
    });
    await onChanged(site.id);
    return { version: plan.version };
  });

  addSiteRoute(app, table, deps, changeContract, async (context) => {
    const change = await changeBedsNow(deps, context, context.body);
    return { changeId: change.id, outlookId: await onChanged(context.site.id) };
  });
}
