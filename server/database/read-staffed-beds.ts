import { MoreThan, type EntityManager } from 'typeorm';
import { staffedBedSteps, type BedStep } from '../../shared/domain/bed-schedule.ts';
import type { Zone } from '../../shared/domain/zoned-time.ts';
import { BedChange } from '../entities/BedChange.ts';
import { StaffedBedPlan } from '../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../entities/StaffedBedPlanArea.ts';

/** The plan in force (the newest version) with its areas; null before the first. */
export async function readPlan(
  read: EntityManager,
  siteId: string,
): Promise<{ plan: StaffedBedPlan; areas: StaffedBedPlanArea[] } | null> {
  const plan = await read.findOne(StaffedBedPlan, { where: { siteId }, order: { version: 'DESC' } });
  if (!plan) return null;
  return { plan, areas: await read.findBy(StaffedBedPlanArea, { planId: plan.id }) };
}

/** Exceptions and changes that end after an instant; a later one outranks an earlier, a change made now any exception. */
export async function readBedChanges(read: EntityManager, siteId: string, endingAfter: number): Promise<BedChange[]> {
  const changes = await read.find(BedChange, {
    where: { siteId, untilAt: MoreThan(endingAfter) },
    order: { madeAt: 'ASC', id: 'ASC' },
  });
  const rank = (change: BedChange) => (change.kind === 'change now' ? 1 : 0);
  return changes.sort((a, b) => rank(a) - rank(b) || a.madeAt - b.madeAt);
}

/** Staffed beds of every area in [from, to) by area id; null where the plan does not name the area. */
export async function readStaffedBedSteps(
  read: EntityManager,
  siteId: string,
  zone: Zone,
  areaIds: readonly string[],
  from: number,
  to: number,
): Promise<Map<string, BedStep[]> | null> {
  const inForce = await readPlan(read, siteId);
  if (!inForce) return null;
  const changes = await readBedChanges(read, siteId, from);
  const steps = new Map<string, BedStep[]>();
  for (const areaId of areaIds) {
    const planned = inForce.areas.find((area) => area.areaId === areaId);
    if (!planned) return null;
    const own = changes.filter((change) => change.areaId === areaId);
    steps.set(areaId, staffedBedSteps(zone, planned.halfHours, own, from, to));
  }
  return steps;
}
