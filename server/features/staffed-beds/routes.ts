import type { Express } from 'express';
import {
  addBedException as addExceptionContract,
  changeBedsNow as changeContract,
  getPlanVersion,
  getRequiredBeds,
  getStaffedBeds,
  listPlanVersions,
  removeBedException as removeExceptionContract,
  savePlan as saveContract,
} from '../../../shared/api/staffed-beds.ts';
import { readBedChanges, readPlan } from '../../database/read-staffed-beds.ts';
import { savePlan } from '../../database/save-plan.ts';
import type { Dependencies } from '../../dependencies.ts';
import { StaffedBedPlan } from '../../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../../entities/StaffedBedPlanArea.ts';
import { notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { addBedException, removeBedException } from './bed-exceptions.ts';
import { changeBedsNow } from './change-beds-now.ts';
import { readRequiredBeds } from './required-beds.ts';

/** Told when something that an outlook depends on has changed; answers with the outlook's id, or null where there is none. */
export type OnBedsChanged = (siteId: string) => Promise<string | null>;

/** The staffed-bed plan with its versions, dated exceptions, and changes for the current and next shift. */
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
      await recordAudit(manager, context, 'staffed-beds.plan-saved', saved.id, { version: saved.version }, body.reason);
      return saved;
    });
    await onChanged(site.id);
    return { version: plan.version };
  });

  addSiteRoute(app, table, deps, listPlanVersions, async ({ site }) => ({
    versions: await read.find(StaffedBedPlan, { where: { siteId: site.id }, order: { version: 'DESC' } }),
  }));

  addSiteRoute(app, table, deps, getPlanVersion, async ({ site, params }) => {
    const plan = await read.findOneBy(StaffedBedPlan, { siteId: site.id, version: params.version });
    if (!plan) throw notFound('This version of the plan');
    return { ...plan, areas: await read.findBy(StaffedBedPlanArea, { planId: plan.id }) };
  });

  addSiteRoute(app, table, deps, getRequiredBeds, ({ site, now }) => readRequiredBeds(read, site, now));

  addSiteRoute(app, table, deps, addExceptionContract, async (context) => {
    const change = await addBedException(deps, context, context.body);
    return { changeId: change.id, outlookId: await onChanged(context.site.id) };
  });

  addSiteRoute(app, table, deps, removeExceptionContract, async (context) => {
    await removeBedException(deps, context, context.params.changeId);
    return { outlookId: await onChanged(context.site.id) };
  });

  addSiteRoute(app, table, deps, changeContract, async (context) => {
    const change = await changeBedsNow(deps, context, context.body);
    return { changeId: change.id, outlookId: await onChanged(context.site.id) };
  });
}
