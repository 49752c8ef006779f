import type { CensusBody } from '../../../shared/api/censuses.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Census } from '../../entities/Census.ts';
import { CensusArea } from '../../entities/CensusArea.ts';
import { badInput, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { ActorContext } from '../../http/route.ts';

const oldestHours = 8;
/** A workstation's clock may run a little ahead of the server's. */
const aheadSeconds = 120;

/** Stores a census entry: whole or not at all, every fault listed. Entries are added, never changed. */
export async function enterCensus(
  deps: Dependencies,
  context: Pick<ActorContext<unknown>, 'site' | 'actor' | 'caller' | 'token' | 'now' | 'requestId' | 'address'>,
  body: CensusBody,
): Promise<string> {
  const { site, actor, now } = context;
  const areas = await readAreas(deps.database.read, site.id);
  const faults: Fault[] = [];
  if (body.takenAt > now + aheadSeconds) {
    faults.push({ at: 'takenAt', message: 'The census is dated in the future. Check the clock of this workstation.' });
  }
  if (body.takenAt < now - oldestHours * 3600) {
    faults.push({
      at: 'takenAt',
      message: `The census is more than ${String(oldestHours)} h old. Count again and enter what is there now.`,
    });
  }
  for (const [index, area] of body.areas.entries()) {
    if (!areas.some((known) => known.id === area.areaId)) {
      faults.push({ at: `areas.${String(index)}.areaId`, message: 'This care area does not belong to the site.' });
    }
  }
  if (body.ambulancesHolding !== null && body.ambulancesHolding > (body.undecidedWaiting ?? 0)) {
    faults.push({
      at: 'ambulancesHolding',
      message: 'Ambulances holding are part of those waiting with no area decided: there cannot be more.',
    });
  }
  if (faults.length > 0) throw badInput('The census was refused.', faults);

  const id = newId();
  const takenAt = Math.min(body.takenAt, now);
  await deps.database.write(async (manager) => {
    await manager.insert(Census, {
      id,
      siteId: site.id,
      takenAt,
      savedAt: now,
      enteredBy: actor.name,
      undecidedWaiting: body.undecidedWaiting,
      ambulancesHolding: body.ambulancesHolding,
      arrivalsSinceMidnight: body.arrivalsSinceMidnight,
    });
    if (body.areas.length > 0) {
      await manager.insert(
        CensusArea,
        body.areas.map(({ areaId, present, waiting, boarding }) => ({
          censusId: id,
          areaId,
          takenAt,
          savedAt: now,
          present,
          waiting,
          boarding,
        })),
      );
    }
    await recordAudit(manager, context, 'census.entered', id, { takenAt, areas: body.areas.length });
  });
  return id;
}
