import type { EntityManager } from 'typeorm';
import { withArticle } from '../../shared/domain/identifier-kind.ts';
import { planFaults } from '../../shared/domain/plan-faults.ts';
import { screenNote } from '../../shared/domain/screen-note.ts';
import { newId } from './new-id.ts';
import { readAreas } from './read-site.ts';
import { StaffedBedPlan } from '../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../entities/StaffedBedPlanArea.ts';
import { badInput, conflict, type Fault } from '../errors.ts';

/** A plan to save: every care area by half hour of week. */
export interface PlanInput {
  areas: { areaId: string; halfHours: number[] }[];
  reason: string;
  /** The version that was read before the change, 0 for none; left out: whatever is in force is followed. */
  basedOnVersion?: number | undefined;
}

/** More than a person reads; the count tells of the rest. */
const faultsListed = 200;

/**
 * Saves a new version of a site's plan within the caller's transaction. Refused whole, with every cell
 * named, where an area is missing, unknown or named twice, a cell is below the area's safe minimum, or
 * beyond the bed spaces that exist; where the reason could identify a person; and where somebody else saved meanwhile.
 */
export async function savePlan(
  manager: EntityManager,
  siteId: string,
  input: PlanInput,
  savedBy: string,
  now: number,
): Promise<StaffedBedPlan> {
  const areas = await readAreas(manager, siteId);
  const faults: Fault[] = [];
  for (const area of areas) {
    if (!input.areas.some((planned) => planned.areaId === area.id)) {
      faults.push({ at: area.name, message: 'The plan does not name this care area.' });
    }
  }
  for (const [index, planned] of input.areas.entries()) {
    const area = areas.find((candidate) => candidate.id === planned.areaId);
    if (!area) {
      faults.push({ at: `areas.${String(index)}`, message: 'This care area does not belong to the site.' });
      continue;
    }
    if (input.areas.findIndex((other) => other.areaId === area.id) < index) {
      faults.push({ at: `areas.${String(index)}`, message: `${area.name} is named twice.` });
      continue;
    }
    for (const { at, message } of planFaults(area, planned.halfHours)) faults.push({ at, message });
  }
  const kind = screenNote(input.reason);
  if (kind !== null) {
    faults.push({
      at: 'reason',
      message: `The reason seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
    });
  }
  if (faults.length > 0) {
    const count = faults.length === 1 ? '1 fault' : `${String(faults.length)} faults`;
    throw badInput(`The plan has ${count}.`, faults.slice(0, faultsListed));
  }
  const last = await manager.findOne(StaffedBedPlan, { where: { siteId }, order: { version: 'DESC' } });
  if (input.basedOnVersion !== undefined && input.basedOnVersion !== (last?.version ?? 0)) {
    throw conflict(
      last
        ? `${last.savedBy} saved version ${String(last.version)} of the plan meanwhile.`
        : `The plan has no version ${String(input.basedOnVersion)}.`,
      'Compare your plan with the one in force, then save it on top of that.',
    );
  }
  const plan = await manager.save(
    manager.create(StaffedBedPlan, {
      id: newId(),
      siteId,
      version: (last?.version ?? 0) + 1,
      savedAt: now,
      savedBy,
      reason: input.reason,
    }),
  );
  await manager.insert(
    StaffedBedPlanArea,
    input.areas.map(({ areaId, halfHours }) => ({ planId: plan.id, areaId, halfHours })),
  );
  return plan;
}
