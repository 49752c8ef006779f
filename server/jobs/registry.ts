import type { Dependencies } from '../dependencies.ts';
import { compareJobKind, makeCompareKind } from '../features/arrival-models/compare-models.job.ts';
import { fitJobKind, makeFitKind } from '../features/arrival-models/fit-model.job.ts';
import { levelJob, refreshJobKind } from '../features/arrival-models/level-job.ts';
import { makeRefreshKind } from '../features/arrival-models/refresh-level.job.ts';
import { composeJobKind, makeComposeKind } from '../features/briefs/compose-brief.job.ts';
import { sendJobKind } from '../features/briefs/put-on-its-way.ts';
import { makeSendKind } from '../features/briefs/send-brief.job.ts';
import type { OutlookIssuer } from '../features/outlook/issuer.ts';
import { confirmJobKind, makeConfirmKind } from '../features/scenarios/confirm-scenario.job.ts';
import { makeRecomputeKind, recomputeJobKind } from '../features/track-record/recompute-record.job.ts';
import { makeScoreKind, scoreJob, scoreJobKind } from '../features/track-record/score-outlooks.job.ts';
import { visitLogJobs } from '../features/visit-logs/routes.ts';
import { buildWeekInput } from '../features/week-ahead/build-week-input.ts';
import { makeWeekOutlookKind, weekOutlookJobKind } from '../features/week-ahead/issue-week-outlook.job.ts';
import { backupJobKind, makeBackupKind } from '../features/server-status/make-backup.job.ts';
import { mailJobKind, makeMailKind } from '../mail/send-mail.job.ts';
import { VisitLog } from '../entities/VisitLog.ts';
import type { JobKind } from './queue.ts';

/** Every kind of job: how it is done and what is tidied when it fails. Features meet here: a log that lands moves the level of the model in use, and that asks for a new outlook. */
export function makeJobKinds(deps: Dependencies, issuer: OutlookIssuer): Record<string, JobKind> {
  return {
    [fitJobKind]: makeFitKind(deps),
    [compareJobKind]: makeCompareKind(deps),
    [confirmJobKind]: makeConfirmKind(deps),
    [composeJobKind]: makeComposeKind(deps),
    [backupJobKind]: makeBackupKind(deps),
    [mailJobKind]: makeMailKind(deps),
    [sendJobKind]: makeSendKind(deps),
    [recomputeJobKind]: makeRecomputeKind(deps, () => issuer.computingAny(), buildWeekInput),
    [scoreJobKind]: makeScoreKind(deps),
    [weekOutlookJobKind]: makeWeekOutlookKind(deps),
    [refreshJobKind]: makeRefreshKind(deps, async (siteId) => {
      await issuer.issue(siteId, 'log accepted');
    }),
    ...visitLogJobs(deps, async (manager, siteId) => {
      await deps.jobs.enqueue(manager, levelJob(siteId));
      // The log tells what became of earlier forecasts.
      const [log] = await manager.find(VisitLog, {
        where: { siteId, status: 'ready' },
        order: { readyAt: 'DESC', number: 'DESC' },
        take: 1,
      });
      await deps.jobs.enqueue(manager, scoreJob(siteId, log.periodFrom, log.periodTo));
    }),
  };
}
