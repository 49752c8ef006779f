import { screenFileName } from '../../../shared/domain/screen-file-name.ts';
import type { FileFault, FileOutcome } from '../../../shared/domain/visit-file.ts';
import type { VisitReport } from '../../../shared/domain/visit-report.ts';
import { rowProblems, visitColumnNames } from '../../../shared/domain/visit-row.ts';
import { visitLogLimits, type checkVisitLog as contract, type VisitLogCheck } from '../../../shared/api/visit-logs.ts';
import { newId } from '../../database/new-id.ts';
import { readCounting } from '../../database/read-counting.ts';
import { readShifts } from '../../database/read-site.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { HttpError, type Fault } from '../../errors.ts';
import type { ActorContext } from '../../http/route.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { checkedTextFile, forgetChecked, keepChecked, sweepChecked, type CheckedFile } from './checked-file.ts';
import { refuseRepeat } from './find-repeat.ts';
import { presentCheck } from './present.ts';
import type { ReadVisitLogInput } from './read-visit-log.worker.ts';
import { receiveUpload } from './receive-upload.ts';
import { checksInUse } from './sweep-visit-logs.ts';

/**
 * Receives a visit log and checks it on a thread. A file that is refused is deleted at once; one that
 * passes waits an hour for its acceptance.
 */
export async function checkVisitLog(context: ActorContext<typeof contract>): Promise<VisitLogCheck> {
  const { deps, site, actor, now, req } = context;
  const { dataDir } = deps.config;
  await sweepChecked(dataDir, await checksInUse(deps), { starting: false });
  const checkId = newId();
  const file = checkedTextFile(dataDir, checkId);
  const received = await receiveUpload(req, file, visitLogLimits.bytes);
  try {
    await refuseRepeat(deps.database.read, site, received.sha256);
    const areas = await deps.database.read.find(CareArea, { where: { siteId: site.id }, order: { position: 'ASC' } });
    const logs = await readCounting(deps.database.read, site.id);
    const input: ReadVisitLogInput = {
      file,
      now,
      areas: areas.map(({ id, name, code }) => ({ id, name, code })),
      timeZone: site.timeZone,
      port: null,
      study: {
        shiftEnds: (await readShifts(deps.database.read, site.id)).map(({ endMinute }) => endMinute),
        covered: logs.flatMap(({ counts }) => counts),
      },
    };
    const outcome = await deps.pool.run<FileOutcome>(workerUrl(import.meta.url, 'read-visit-log.worker'), input);
    if (outcome.refused !== null) throw fileRefused(outcome.refused, outcome.identifying);
    const { report, problemRows, study, counted } = outcome;
    if (report.goodRows === 0) {
      throw fileRefused(problemFaults(report), false, 'No row of the file can be read as a visit.');
    }
    const checked: CheckedFile = {
      checkId,
      siteId: site.id,
      personId: actor.id,
      fileName: screenFileName(context.query.fileName, now),
      ...received,
      checkedAt: now,
      report,
      counted,
    };
    await keepChecked(dataDir, checked, problemRows);
    return presentCheck(checked, study, logs, areas, site.timeZone, now);
  } catch (error) {
    await forgetChecked(dataDir, checkId);
    throw error;
  }
}

/** 422 with every fault; nothing of the file is kept. */
export function fileRefused(faults: FileFault[], identifying: boolean, detail?: string): HttpError {
  return new HttpError(
    422,
    identifying ? 'The file could identify patients' : 'File refused',
    detail ??
      (identifying
        ? 'Something in the file could identify a patient. The values are not repeated here.'
        : 'The file cannot be read as a visit log.'),
    {
      kept: 'The file was deleted and nothing was stored.',
      next: identifying
        ? 'Take out what is named below and send the file again.'
        : 'Correct what is named below and send the file again.',
      faults,
    },
  );
}

/** Each kind of problem as a fault, with how many rows and the first few by number. */
export function problemFaults(report: VisitReport): Fault[] {
  return report.problems.map(({ problem, column, rows, examples }) => {
    const named = `${rows.toLocaleString('en')} ${rows === 1 ? 'row' : 'rows'}, ${rows > examples.length ? 'the first: ' : 'row '}${examples.join(', ')}`;
    return {
      at: column === null ? 'row' : `${column} (${visitColumnNames[column]})`,
      message: `${rowProblems[problem]} ${named}.`,
    };
  });
}
