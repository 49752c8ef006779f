import type { Dependencies } from '../dependencies.ts';
import { fitJobKind, makeFitKind } from '../features/arrival-models/fit-model.job.ts';
import { makeRefreshKind, refreshJobKind } from '../features/arrival-models/refresh-level.job.ts';
import type { OutlookIssuer } from '../features/outlook/issuer.ts';
import { visitLogJobs } from '../features/visit-logs/routes.ts';
import { mailJobKind, makeMailKind } from '../mail/send-mail.job.ts';
import type { JobKind } from './queue.ts';

/** Every kind of job: how it is done and what is tidied when it fails. Features meet here: a log that lands moves the level of the model in use, and that asks for a new outlook. */
export function makeJobKinds(deps: Dependencies, issuer: OutlookIssuer): Record<string, JobKind> {
  return {
    [fitJobKind]: makeFitKind(deps),
    [mailJobKind]: makeMailKind(deps),
    [refreshJobKind]: makeRefreshKind(deps, async (siteId) => {
      await issuer.issue(siteId, 'log accepted');
    }),
    ...visitLogJobs(deps, async (manager, siteId) => {
      await deps.jobs.enqueue(manager, {
        kind: refreshJobKind,
        title: 'Move the level of the model in use on',
        siteId,
        payload: { siteId },
        createdBy: 'the job queue',
      });
    }),
  };
}
