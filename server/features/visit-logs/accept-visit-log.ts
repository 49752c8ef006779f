import type { acceptVisitLog as contract } from '../../../shared/api/visit-logs.ts';
import { newId } from '../../database/new-id.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { badInput, HttpError } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { ActorContext } from '../../http/route.ts';
import { checkStatedStays } from './check-stated-stays.ts';
import { findChecked } from './checked-file.ts';
import { fileRefused, problemFaults } from './check-visit-log.ts';
import { importJobKind, type ImportPayload } from './import-payload.ts';
import { refuseRepeat } from './find-repeat.ts';
import { periodOf } from '../../../shared/domain/log-period.ts';
import { keepMapping, screenMapping } from './remember-mapping.ts';

const clockTolerance = 300;

/** Accepts a checked file: a log marked loading, and the job that fills it, in one write. */
export async function acceptVisitLog({
  deps,
  site,
  actor,
  now,
  body,
  ...request
}: ActorContext<typeof contract>): Promise<{ logId: string; jobId: string }> {
  const checked = await findChecked(deps.config.dataDir, site.id, body.checkId, now);
  if (!checked) {
    throw new HttpError(
      404,
      'Check not found',
      'There is no checked file of this id: it was discarded, or its hour is over.',
      {
        kept: 'Nothing was stored.',
        next: 'Send the file again.',
      },
    );
  }
  const { report } = checked;
  if (report.problemRows > 0 && !body.goodRowsOnly) {
    throw new HttpError(
      422,
      'The file has problem rows',
      `${report.problemRows.toLocaleString('en')} of ${report.rows.toLocaleString('en')} rows cannot be accepted, and the file was to be accepted whole.`,
      {
        kept: 'Nothing was loaded; the checked file waits until its hour is over.',
        next: 'Correct the file and send it again, or accept the good rows only.',
        faults: problemFaults(report),
      },
    );
  }
  const { facts } = body;
  if (facts.takenAt > now + clockTolerance) {
    throw badInput('The extract cannot have been taken in the future.', [
      { at: 'facts.takenAt', message: 'Enter when the extract was taken, not later than now.' },
    ]);
  }
  if (report.lastTimeAt !== null && facts.takenAt < report.lastTimeAt) {
    throw badInput('The extract was taken before the last time that it holds.', [
      { at: 'facts.takenAt', message: 'Enter a time that is not before the last arrival or departure in the file.' },
    ]);
  }
  const period = checked.counted
    ? { from: report.firstArrivalAt ?? 0, to: report.lastTimeAt ?? 0 }
    : periodOf(report, site.timeZone, facts.takenAt);
  if (!period) throw fileRefused(problemFaults(report), false, 'No row of the file can be read as a visit.');

  const areas = await deps.database.read.findBy(CareArea, { siteId: site.id });
  const stays = checkStatedStays(checked, areas, body.statedStays);
  const mapping = body.mapping ? screenMapping(body.mapping, areas, now) : null;

  const problems = new Map<string, number>();
  for (const { problem, rows } of [...report.problems, ...body.leftOutBeforeSending.kinds]) {
    problems.set(problem, (problems.get(problem) ?? 0) + rows);
  }
  const logId = newId();
  const jobId = await deps.database.write(async (manager) => {
    await refuseRepeat(manager, site, checked.sha256);
    const [{ last }] = await manager.query<{ last: number | null }[]>(
      'SELECT MAX("number") AS "last" FROM "visit_log"',
    );
    const payload: ImportPayload = { logId, checkId: checked.checkId, byToken: request.token !== null };
    const job = await deps.jobs.enqueue(manager, {
      kind: importJobKind,
      title: `Load ${checked.fileName}`,
      siteId: site.id,
      payload,
      createdBy: actor.name,
    });
    await manager.insert(VisitLog, {
      id: logId,
      kind: checked.counted === null ? 'visits' : 'hourly counts',
      statedStays: stays,
      number: (last ?? 0) + 1,
      siteId: site.id,
      status: 'loading',
      fileName: checked.fileName,
      sha256: checked.sha256,
      rows: report.goodRows,
      periodFrom: period.from,
      periodTo: period.to,
      statedFrom: null,
      ...facts,
      // Hourly counts say who came in each hour, and of nobody when that visit ended.
      ...(checked.counted === null ? {} : { selectedBy: 'arrived' as const, missingDeparture: 'unknown' as const }),
      problems: {
        rows: report.problemRows + body.leftOutBeforeSending.rows,
        kinds: [...problems].map(([kind, rows]) => ({ kind, rows })),
      },
      visitsByArea: report.visitsByArea.map(({ area, visits }) => ({ areaCode: area, visits })),
      uploadedBy: actor.name,
      uploadedAt: now,
      readyAt: null,
      withdrawnBy: null,
      withdrawnAt: null,
      reason: null,
      jobId: job,
    });
    if (mapping) await keepMapping(manager, { siteId: site.id, mapping, savedBy: actor.name, savedAt: now });
    await recordAudit(manager, { ...request, site, now }, 'visit-log.accepted', logId, {
      rows: report.goodRows,
      leftOut: report.problemRows + body.leftOutBeforeSending.rows,
      sha256: checked.sha256,
    });
    return job;
  });
  return { logId, jobId };
}
