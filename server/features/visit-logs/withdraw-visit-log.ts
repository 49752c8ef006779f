import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import type { withdrawVisitLog as contract } from '../../../shared/api/visit-logs.ts';
import type { EntityManager } from 'typeorm';
import { VisitLog } from '../../entities/VisitLog.ts';
import { badInput, conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';
import { deleteRowsJob } from './delete-visits.job.ts';

/** Told, in the same transaction, that a log has stopped counting. */
export type OnLogWithdrawn = (manager: EntityManager, log: VisitLog) => Promise<void>;

/** Takes a log back: its visits stop counting with this write, and are deleted by a job. */
export async function withdrawVisitLog(
  { deps, site, caller, now, params, body, ...request }: SiteContext<typeof contract>,
  onWithdrawn: OnLogWithdrawn,
): Promise<void> {
  const kind = screenNote(body.reason);
  if (kind !== null) {
    throw badInput(`The reason looks as if it held ${withArticle(kind)}.`, [
      { at: 'reason', message: 'Leave out anything that could identify a person.' },
    ]);
  }
  await deps.database.write(async (manager) => {
    const log = await manager.findOneBy(VisitLog, { id: params.logId, siteId: site.id });
    if (!log) throw notFound('This log');
    if (log.status === 'loading')
      throw conflict('The log is still loading.', 'Cancel its loading, or wait until it is ready.');
    if (log.status !== 'ready') throw conflict(`The log is ${log.status} already.`, 'There is nothing to withdraw.');
    await manager.update(
      VisitLog,
      { id: log.id },
      { status: 'withdrawn', withdrawnBy: caller.person.name, withdrawnAt: now, reason: body.reason },
    );
    await deps.jobs.enqueue(manager, deleteRowsJob(log, caller.person.name, null));
    await onWithdrawn(manager, log);
    const source = { ...request, caller, site, now };
    await recordAudit(manager, source, 'visit-log.withdrawn', log.id, { rows: log.rows }, body.reason);
  });
}
