import type { AddBedExceptionBody } from '../../../shared/api/staffed-beds.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { bedsFault } from '../../../shared/domain/plan-faults.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { badInput, conflict, notFound, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';

type ExceptionContext = Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>;

/** Further ahead no exception is planned, seconds. */
const furthestAhead = 366 * 86_400;

/** Plans other staffed beds for an area between two instants. What has passed cannot be planned. */
export async function addBedException(
  deps: Dependencies,
  context: ExceptionContext,
  body: AddBedExceptionBody,
): Promise<BedChange> {
  const { site, caller, now } = context;
  const { read, write } = deps.database;
  const area = (await readAreas(read, site.id)).find((candidate) => candidate.id === body.areaId);
  if (!area) throw notFound('This care area');
  const faults: Fault[] = [];
  const fault = bedsFault(area, body.beds);
  if (fault !== null) faults.push({ at: `${area.name}, beds`, message: fault });
  if (body.untilAt <= now) faults.push({ at: 'untilAt', message: 'This time has passed already.' });
  if (body.untilAt > now + furthestAhead)
    faults.push({ at: 'untilAt', message: 'More than a year ahead is not taken.' });
  const kind = screenNote(body.reason);
  if (kind !== null) {
    faults.push({
      at: 'reason',
      message: `The reason seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
    });
  }
  if (faults.length > 0) throw badInput('The exception was refused.', faults);
  const change: BedChange = Object.assign(new BedChange(), {
    id: newId(),
    siteId: site.id,
    areaId: area.id,
    kind: 'dated exception' as const,
    fromAt: body.fromAt,
    untilAt: body.untilAt,
    beds: body.beds,
    blocked: 0,
    reason: body.reason,
    madeBy: caller.person.name,
    madeAt: now,
  });
  await write(async (manager) => {
    await manager.insert(BedChange, change);
    const { areaId, beds, fromAt, untilAt } = change;
    const detail = { areaId, beds, fromAt, untilAt };
    await recordAudit(manager, context, 'staffed-beds.exception-added', change.id, detail, change.reason);
  });
  return change;
}

/** Takes a dated exception back. One that has begun ends now, and what it did until then stays on record. */
export async function removeBedException(
  deps: Dependencies,
  context: ExceptionContext,
  changeId: string,
): Promise<void> {
  const { site, now } = context;
  await deps.database.write(async (manager) => {
    const change = await manager.findOneBy(BedChange, { id: changeId, siteId: site.id, kind: 'dated exception' });
    if (!change) throw notFound('This exception');
    if (change.untilAt <= now) throw conflict('This exception has ended already.', 'Nothing needs to be done.');
    if (change.fromAt < now) await manager.update(BedChange, { id: change.id }, { untilAt: now });
    else await manager.delete(BedChange, { id: change.id });
    const { areaId, beds, fromAt, untilAt } = change;
    const detail = { areaId, beds, fromAt, untilAt };
    await recordAudit(manager, context, 'staffed-beds.exception-removed', change.id, detail);
  });
}
