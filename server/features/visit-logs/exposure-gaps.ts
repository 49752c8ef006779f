import type { EntityManager } from 'typeorm';
import type { declareExposureGap, ExposureGap, removeExposureGap } from '../../../shared/api/exposure-gaps.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { badInput, conflict, notFound, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';

/** A closure may be declared ahead, but not one that nobody can know of yet. */
const farthestAhead = 31 * 86_400;
const year2000 = 946_684_800;

/** The site's outages and diversions, newest first. */
export async function listGaps(deps: Dependencies, siteId: string): Promise<ExposureGap[]> {
  const rows = await deps.database.read.find(ExposureGapRow, { where: { siteId }, order: { fromAt: 'DESC' } });
  return rows.map(presentGap);
}

/** Told, in the same transaction, that a site's logs speak for other hours than before. */
export type OnGapsChanged = (manager: EntityManager, siteId: string) => Promise<void>;

/** Declares an outage or a diversion; every fault at once. */
export async function declareGap(
  { deps, site, caller, now, body, ...request }: SiteContext<typeof declareExposureGap>,
  onChanged: OnGapsChanged,
): Promise<ExposureGap> {
  const faults: Fault[] = [];
  if (body.from < year2000) faults.push({ at: 'from', message: 'Not before the year 2000.' });
  if (body.until <= body.from) faults.push({ at: 'until', message: 'The end must lie after the start.' });
  if (body.until > now + farthestAhead) faults.push({ at: 'until', message: 'Not more than 31 days ahead.' });
  const kind = screenNote(body.reason);
  if (kind !== null)
    faults.push({ at: 'reason', message: `It looks as if it held ${withArticle(kind)}. Leave that out.` });
  const { areaId } = body;
  if (areaId !== null && !(await deps.database.read.existsBy(CareArea, { id: areaId, siteId: site.id })))
    faults.push({ at: 'areaId', message: 'It is no care area of this site.' });
  if (faults.length > 0) throw badInput('It cannot be declared as it is.', faults);

  const row = {
    id: newId(),
    siteId: site.id,
    areaId,
    fromAt: body.from,
    untilAt: body.until,
    reason: body.reason,
    kind: body.kind,
    declaredBy: caller.person.name,
    declaredAt: now,
  };
  await deps.database.write(async (manager) => {
    const same = await manager.findBy(ExposureGapRow, { siteId: site.id, fromAt: body.from, untilAt: body.until });
    if (same.some((gap) => gap.areaId === areaId))
      throw conflict('The same hours of the same area are declared already.', 'There is nothing to do.');
    await manager.insert(ExposureGapRow, row);
    if (row.fromAt < now) await onChanged(manager, site.id);
    const { from, until } = body;
    const detail = { kind: body.kind, areaId, from, until };
    const source = { ...request, caller, site, now };
    await recordAudit(manager, source, 'exposure-gap.declared', row.id, detail, row.reason);
  });
  return presentGap(row);
}

/** Removes what was declared; the audit trail keeps what it was. */
export async function removeGap(
  { deps, site, caller, now, params, ...request }: SiteContext<typeof removeExposureGap>,
  onChanged: OnGapsChanged,
): Promise<null> {
  await deps.database.write(async (manager) => {
    const row = await manager.findOneBy(ExposureGapRow, { id: params.gapId, siteId: site.id });
    if (!row) throw notFound('This outage or diversion');
    await manager.delete(ExposureGapRow, { id: row.id });
    if (row.fromAt < now) await onChanged(manager, site.id);
    const detail = { kind: row.kind, areaId: row.areaId, from: row.fromAt, until: row.untilAt };
    await recordAudit(manager, { ...request, caller, site, now }, 'exposure-gap.removed', row.id, detail);
  });
  return null;
}

function presentGap(row: Omit<ExposureGapRow, 'site' | 'area'>): ExposureGap {
  const { id, kind, areaId, fromAt, untilAt, reason, declaredBy, declaredAt } = row;
  return { id, kind, areaId, from: fromAt, until: untilAt, reason, declaredBy, declaredAt };
}
