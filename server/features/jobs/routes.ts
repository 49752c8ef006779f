import type { Express } from 'express';
import { cancelJob, listJobs, type Job as JobReply } from '../../../shared/api/jobs.ts';
import { isGranted } from '../../../shared/domain/permission.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { conflict, notAllowed, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';

/** Background work of a site. */
export function addJobRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { database } = deps;

  addSiteRoute(app, table, deps, listJobs, async ({ site }) => {
    const jobs = await database.read.find(Job, { where: { siteId: site.id }, order: { createdAt: 'DESC' }, take: 100 });
    return { jobs: jobs.map(presentJob) };
  });

  addSiteRoute(app, table, deps, cancelJob, async (context) => {
    const where = { id: context.params.jobId, siteId: context.site.id };
    const job = await database.read.findOneBy(Job, where);
    if (!job) throw notFound('This job');
    // What concerns visit logs is the steward's alone.
    const roles = context.caller.rolesAt.get(where.siteId) ?? [];
    if (job.kind.startsWith('visit-log.') && !isGranted(roles, 'visit-log:upload')) throw notAllowed();
    // A plan's confirmation is cancelled by those who save plans.
    if (job.kind.startsWith('scenario.') && !isGranted(roles, 'scenario:save')) throw notAllowed();
    const cancelled = await deps.jobs.cancel(where.id, (manager) =>
      recordAudit(manager, context, 'job.cancelled', where.id),
    );
    if (!cancelled) throw conflict('The job had already ended.', 'Nothing more to do.');
    return presentJob(await database.read.findOneByOrFail(Job, where));
  });
}

function presentJob(job: Job): JobReply {
  const { id, kind, title, status, progress, progressText, error, createdAt, endedAt } = job;
  return { id, kind, title, status, progress, progressText, error, createdAt, endedAt };
}
