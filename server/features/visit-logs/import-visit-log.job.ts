import type { EntityManager } from 'typeorm';
import type { Dependencies } from '../../dependencies.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { Job } from '../../entities/Job.ts';
import { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, type JobKind } from '../../jobs/queue.ts';
import { checkedTextFile, findChecked, forgetChecked } from './checked-file.ts';
import { deleteRowsJob } from './delete-visits.job.ts';
import type { ImportPayload } from './import-payload.ts';
import { deleteRows, loadRows } from './load-rows.ts';
import { tellLoadFailed } from './tell-stewards.ts';

/** Told, in the last write's own transaction, that a log of a site counts from now on. */
export type OnLogReady = (manager: EntityManager, siteId: string) => Promise<void>;

/**
 * Loads an accepted file. It can be run again from the start at any time: rows of an earlier attempt
 * are deleted first, and only the last write lets the log count. So a log has all of its rows or none.
 * If it fails for good or is cancelled, the log is failed and its rows are deleted by another job.
 */
export function makeImportVisitLog(deps: Dependencies, onReady: OnLogReady): JobKind {
  const { database, config, clock } = deps;
  return {
    async run({ payload, signal, progress }) {
      const { logId, checkId } = payload as ImportPayload;
      const log = await database.read.findOneByOrFail(VisitLog, { id: logId });
      if (log.status !== 'loading') return;
      await deleteRows(deps, log.number);
      const checked = await findChecked(config.dataDir, log.siteId, checkId, log.uploadedAt);
      if (!checked) throw new PermanentJobError('The checked file is no longer there. Send it again.');
      const areas = await database.read.findBy(CareArea, { siteId: log.siteId });
      const file = checkedTextFile(config.dataDir, checkId);
      const { timeZone } = await database.read.findOneByOrFail(Site, { id: log.siteId });
      const task = { file, now: checked.checkedAt, areas, timeZone, logNumber: log.number, kind: log.kind };
      const outcome = await loadRows(deps, task, signal, (rows) => {
        progress(rows / log.rows, `${rows.toLocaleString('en')} of ${log.rows.toLocaleString('en')} rows`);
      });
      if (outcome.refused !== null || outcome.report.goodRows !== log.rows) {
        throw new PermanentJobError('The file or the care areas have changed since the check. Send the file again.');
      }
      signal.throwIfAborted();
      await database.write(async (manager) => {
        const ready = await manager.update(
          VisitLog,
          { id: logId, status: 'loading' },
          { status: 'ready', readyAt: clock() },
        );
        if (ready.affected !== 1) return;
        await recordOwnAudit(manager, {
          at: clock(),
          actor: log.uploadedBy,
          siteId: log.siteId,
          event: 'visit-log.uploaded',
          subject: logId,
          detail: { rows: log.rows, sha256: log.sha256 },
        });
        await onReady(manager, log.siteId);
      });
      await forgetChecked(config.dataDir, checkId);
    },
    async settle(manager, job, error) {
      const { logId, checkId, byToken = false } = JSON.parse(job.payload) as ImportPayload;
      const failed = await manager.update(
        VisitLog,
        { id: logId, status: 'loading' },
        { status: 'failed', reason: job.status === 'queued' ? `${error} Nothing had been loaded.` : error },
      );
      if (failed.affected !== 1) return;
      const log = await manager.findOneByOrFail(VisitLog, { id: logId });
      await deps.jobs.enqueue(manager, deleteRowsJob(log, 'the job queue', checkId));
      await recordOwnAudit(manager, {
        at: clock(),
        actor: 'the job queue',
        siteId: log.siteId,
        event: 'visit-log.failed',
        subject: logId,
      });
      const { status } = await manager.findOneByOrFail(Job, { id: job.id });
      if (status !== 'failed') return;
      const site = await manager.findOneByOrFail(Site, { id: log.siteId });
      await tellLoadFailed(deps, manager, { log, site, error, byToken });
    },
  };
}
