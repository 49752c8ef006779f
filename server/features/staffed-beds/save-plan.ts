import type { EntityManager } from 'typeorm';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import { StaffedBedPlan } from '../../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../../entities/StaffedBedPlanArea.ts';
import { badInput, type Fault } from '../../errors.ts';

/** A plan to save: every care area by half hour of week. */
export interface PlanInput {
  areas: { areaId: string; halfHours: number[] }[];
  reason: string;
}

/** More than a person reads; the count tells of the rest. */
const faultsListed = 200;
const days = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];

/**
 * Saves a new version of a site's plan within the caller's transaction. Refused whole, with every cell
 * named, where an area is missing, unknown or named twice, a cell is below the area's safe minimum, or
 * beyond the bed spaces that exist; and where the reason could identify a person.
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
    for (const [halfHour, beds] of planned.halfHours.entries()) {
      if (beds < area.safeMinimum) {
        faults.push({
          at: cell(area.name, halfHour),
          message: `${String(beds)} is below the safe minimum of ${String(area.safeMinimum)}.`,
        });
      } else if (beds > area.spaces) {
        faults.push({
          at: cell(area.name, halfHour),
          message: `${String(beds)} is beyond the ${String(area.spaces)} bed spaces that exist.`,
        });
      }
    }
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

function cell(area: string, halfHour: number): string {
  const minutes = (halfHour % 48) * 30;
  const time = `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`;
  return `${area}, ${days[Math.floor(halfHour / 48)]} ${time}`;
}
