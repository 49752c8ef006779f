import { saltbyId } from '../../demo/farrowmere-accounts.ts';
import { makeVisitLog, type DemoVisit } from '../../demo/make-visit-log.ts';
import { dispositions } from '../../shared/domain/disposition.ts';
import { siteProcesses } from '../../demo/visit-process.ts';
import type { Database } from '../../server/database/database.ts';
import { newId } from '../../server/database/new-id.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import type { BuiltSite } from './build-site.ts';

/** Invented visits of a small department, those of its two areas given to the two areas of a built site. */
export function inventVisits(built: BuiltSite, from: number, to: number, seed = 7): DemoVisit[] {
  const site = { id: saltbyId, timeZone: built.site.timeZone };
  const ids = siteProcesses[saltbyId].areas.map(({ areaId }) => areaId);
  return makeVisitLog({ site, from, to, seed }).map((visit) => ({
    ...visit,
    areaId: built.areas[ids.indexOf(visit.areaId)].id,
  }));
}

/** A ready visit log as a load leaves it, with its visits. */
export async function buildVisitLog(
  database: Database,
  built: BuiltSite,
  visits: readonly DemoVisit[],
  log: Pick<VisitLog, 'periodFrom' | 'periodTo' | 'takenAt'> & Partial<VisitLog>,
): Promise<VisitLog> {
  const codeOf = new Map(built.areas.map(({ id, code }) => [id, code]));
  return database.write(async (manager) => {
    const id = newId();
    const number = (await manager.countBy(VisitLog, {})) + 1;
    const saved = await manager.save(
      manager.create(VisitLog, {
        id,
        number,
        siteId: built.site.id,
        status: 'ready',
        fileName: `log ${String(number)}.csv`,
        sha256: id,
        rows: visits.length,
        selectedBy: 'arrived',
        missingDeparture: 'still present',
        problems: { rows: 0, kinds: [] },
        visitsByArea: [],
        uploadedBy: 'Test',
        uploadedAt: log.takenAt,
        readyAt: log.takenAt,
        withdrawnBy: null,
        withdrawnAt: null,
        reason: null,
        jobId: null,
        ...log,
      }),
    );
    const rows = visits.map((visit, index) => [
      number,
      index + 1,
      codeOf.get(visit.areaId),
      visit.arrivalAt,
      visit.bedSpaceAt,
      visit.admissionDecisionAt,
      visit.departureAt,
      visit.disposition === null ? null : dispositions.indexOf(visit.disposition),
      visit.byAmbulance ? 1 : 0,
    ]);
    await manager.query(
      `INSERT INTO visit (logNumber, rowNumber, areaCode, arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt, disposition, byAmbulance)
       SELECT ${[0, 1, 2, 3, 4, 5, 6, 7, 8].map((index) => `value ->> ${String(index)}`).join(', ')} FROM json_each(?)`,
      [JSON.stringify(rows)],
    );
    return saved;
  });
}
