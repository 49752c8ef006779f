import type { EntityManager } from 'typeorm';
import type { AreaBody } from '../../../shared/api/installation.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { badInput, conflict, notFound, type Fault } from '../../errors.ts';

/** Adds a care area at the end of the site's order. Its code is never one that an area of the site had before. */
export async function insertArea(manager: EntityManager, siteId: string, body: AreaBody): Promise<CareArea> {
  await checkName(manager, siteId, body.name, null);
  const areas = await manager.findBy(CareArea, { siteId });
  const next = (values: number[]) => Math.max(-1, ...values) + 1;
  return manager.save(
    manager.create(CareArea, {
      id: newId(),
      siteId,
      code: next(areas.map(({ code }) => code)),
      position: next(areas.map(({ position }) => position)),
      ...body,
      alertLimit: 0.25,
      escalationNote: '',
    }),
  );
}

/** Changes a care area; refuses figures that the plan in force does not keep. */
export async function updateArea(
  manager: EntityManager,
  siteId: string,
  areaId: string,
  body: AreaBody,
): Promise<CareArea> {
  const area = await manager.findOneBy(CareArea, { id: areaId, siteId });
  if (!area) throw notFound('This care area');
  await checkName(manager, siteId, body.name, areaId);
  const planned = (await readPlan(manager, siteId))?.areas.find((row) => row.areaId === areaId)?.halfHours;
  if (planned) {
    const faults: Fault[] = [];
    const most = Math.max(...planned);
    const least = Math.min(...planned);
    if (body.spaces < most) {
      faults.push({ at: 'spaces', message: `The plan in force staffs up to ${String(most)} here.` });
    }
    if (body.safeMinimum > least && body.safeMinimum > area.safeMinimum) {
      faults.push({ at: 'safeMinimum', message: `The plan in force staffs only ${String(least)} at its lowest.` });
    }
    if (faults.length > 0) {
      const next = 'Ask the operations manager to change the plan first, then try again.';
      throw badInput('The plan in force does not keep these figures.', faults, next);
    }
  }
  return manager.save(Object.assign(area, body));
}

/** Removes an area that nothing was ever stored for. */
export async function deleteArea(manager: EntityManager, siteId: string, areaId: string): Promise<CareArea> {
  const area = await manager.findOneBy(CareArea, { id: areaId, siteId });
  if (!area) throw notFound('This care area');
  const used = () =>
    conflict(`Something was stored for ${area.name}.`, 'Set its spaces to what exists; areas with a history stay.');
  // Visits name an area by its code alone.
  if (await manager.existsBy(VisitLog, { siteId })) throw used();
  if ((await manager.countBy(CareArea, { siteId })) === 1)
    throw conflict('A site keeps at least one care area.', 'Add the other area first.');
  try {
    await manager.delete(CareArea, { id: areaId });
  } catch (error) {
    if (error instanceof Error && /FOREIGN KEY/.test(error.message)) throw used();
    throw error;
  }
  return area;
}

/** Sets the order in which a site names its care areas; refuses a list that is not of the areas that there are now. */
export async function setAreaOrder(
  manager: EntityManager,
  siteId: string,
  areaIds: readonly string[],
): Promise<CareArea[]> {
  const areas = await readAreas(manager, siteId);
  if (areas.length !== areaIds.length || areas.some(({ id }) => !areaIds.includes(id))) {
    throw conflict(
      'A care area was added or removed since the list was shown.',
      'Look at the care areas as they are now and set the order again.',
    );
  }
  for (const [position, id] of areaIds.entries()) await manager.update(CareArea, { id }, { position });
  return readAreas(manager, siteId);
}

async function checkName(manager: EntityManager, siteId: string, name: string, ownId: string | null): Promise<void> {
  const same = (await manager.findBy(CareArea, { siteId })).some(
    (area) => area.id !== ownId && area.name.toLowerCase() === name.toLowerCase(),
  );
  if (same) throw badInput('The care area was refused.', [{ at: 'name', message: 'Another area has this name.' }]);
}
