import type { Dependencies } from '../../dependencies.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import type { JobKind, JobSpec } from '../../jobs/queue.ts';
import { forgetChecked } from './checked-file.ts';
import { deleteRows } from './load-rows.ts';

export const deleteRowsJobKind = 'visit-log.delete-rows';

interface DeleteRowsPayload {
  logId: string;
  /** Check whose file is to go as well. */
  checkId: string | null;
}

/** The job that deletes the visits of a log that no longer counts. */
export function deleteRowsJob(
  log: Pick<VisitLog, 'id' | 'siteId' | 'fileName'>,
  createdBy: string,
  checkId: string | null,
): JobSpec {
  const payload: DeleteRowsPayload = { logId: log.id, checkId };
  return {
    kind: deleteRowsJobKind,
    title: `Delete the visits of ${log.fileName}`,
    siteId: log.siteId,
    payload,
    createdBy,
    maxAttempts: 20,
  };
}

/** Deletes the visits of a withdrawn or failed log; may be run again. */
export function makeDeleteVisits(deps: Dependencies): JobKind {
  return {
    async run({ payload, signal, progress }) {
      const { logId, checkId } = payload as DeleteRowsPayload;
      if (checkId !== null) await forgetChecked(deps.config.dataDir, checkId);
      const log = await deps.database.read.findOneByOrFail(VisitLog, { id: logId });
      if (log.status === 'ready' || log.status === 'loading') return;
      await deleteRows(deps, log.number, (rows) => {
        signal.throwIfAborted();
        progress(Math.min(1, rows / Math.max(1, log.rows)), `${rows.toLocaleString('en')} rows deleted`);
      });
    },
  };
}
