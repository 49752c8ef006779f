import type { Express } from 'express';
import { declareExposureGap, listExposureGaps, removeExposureGap } from '../../../shared/api/exposure-gaps.ts';
import { getVisitLogMapping } from '../../../shared/api/visit-log-mapping.ts';
import { getVisitLogPresence } from '../../../shared/api/visit-log-presence.ts';
import { getVisitRetention, setVisitRetention } from '../../../shared/api/visit-retention.ts';
import * as api from '../../../shared/api/visit-logs.ts';
import { countingSpans } from '../../database/counting-spans.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CareArea } from '../../entities/CareArea.ts';
import type { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { notFound } from '../../errors.ts';
import { addActorRoute, addSiteRoute, type RouteTable } from '../../http/route.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { acceptVisitLog } from './accept-visit-log.ts';
import { findChecked, forgetChecked } from './checked-file.ts';
import { checkVisitLog } from './check-visit-log.ts';
import { comparePresence } from './compare-presence.ts';
import { deleteRowsJobKind, makeDeleteVisits } from './delete-visits.job.ts';
import { declareGap, listGaps, removeGap, type OnGapsChanged } from './exposure-gaps.ts';
import { importJobKind } from './import-payload.ts';
import { makeImportVisitLog, type OnLogReady } from './import-visit-log.job.ts';
import { presentVisitLog, presentVisitLogDetail } from './present.ts';
import { makePurgeVisits, purgeJobKind } from './purge-visits.job.ts';
import { readMapping } from './remember-mapping.ts';
import { sendProblemRows } from './send-problem-rows.ts';
import { checksInUse } from './sweep-visit-logs.ts';
import { tellIfRefused } from './tell-stewards.ts';
import { readRetention, saveRetention } from './visit-retention.ts';
import { withdrawVisitLog, type OnLogWithdrawn } from './withdraw-visit-log.ts';

/** Routes of visit logs (list, one, check, accept, discard, withdraw) and of the hours that no log can speak for. */
export function addVisitLogRoutes(
  app: Express,
  routes: RouteTable,
  deps: Dependencies,
  on: { withdrawn: OnLogWithdrawn; gapsChanged: OnGapsChanged },
): void {
  addSiteRoute(app, routes, deps, api.listVisitLogs, async ({ site }) => {
    const { logs, spans } = await readLogs(deps, site);
    return { logs: logs.map((log) => presentVisitLog(log, spans.get(log.number) ?? [])) };
  });

  addSiteRoute(app, routes, deps, api.getVisitLog, ({ site, params }) => readDetail(deps, site, params.logId));

  addSiteRoute(app, routes, deps, getVisitLogPresence, (context) => comparePresence(context));

  addActorRoute(app, routes, deps, api.checkVisitLog, (context) =>
    tellIfRefused(context, () => checkVisitLog(context)),
  );

  addSiteRoute(app, routes, deps, api.discardVisitLogCheck, async ({ site, params, now }) => {
    const checked = await findChecked(deps.config.dataDir, site.id, params.checkId, now);
    if (!checked || (await checksInUse(deps)).has(params.checkId)) throw notFound('This check');
    await forgetChecked(deps.config.dataDir, params.checkId);
    return null;
  });

  addSiteRoute(app, routes, deps, api.getProblemRows, (context) => sendProblemRows(context));

  addActorRoute(app, routes, deps, api.acceptVisitLog, (context) =>
    tellIfRefused(context, () => acceptVisitLog(context)),
  );

  addSiteRoute(app, routes, deps, getVisitLogMapping, async ({ site }) => ({
    remembered: await readMapping(deps.database.read, site.id),
  }));

  addSiteRoute(app, routes, deps, listExposureGaps, async ({ site }) => ({ gaps: await listGaps(deps, site.id) }));

  addSiteRoute(app, routes, deps, declareExposureGap, (context) => declareGap(context, on.gapsChanged));

  addSiteRoute(app, routes, deps, removeExposureGap, (context) => removeGap(context, on.gapsChanged));

  addSiteRoute(app, routes, deps, getVisitRetention, ({ site, now }) => readRetention(deps, site.id, now));

  addSiteRoute(app, routes, deps, setVisitRetention, (context) => saveRetention(context));

  addSiteRoute(app, routes, deps, api.withdrawVisitLog, async (context) => {
    await withdrawVisitLog(context, on.withdrawn);
    return readDetail(deps, context.site, context.params.logId);
  });
}

/** What the job queue does for this feature. */
export function visitLogJobs(deps: Dependencies, onReady: OnLogReady): Record<string, JobKind> {
  return {
    [importJobKind]: makeImportVisitLog(deps, onReady),
    [deleteRowsJobKind]: makeDeleteVisits(deps),
    [purgeJobKind]: makePurgeVisits(deps),
  };
}

async function readLogs(deps: Dependencies, site: Site) {
  const logs = await deps.database.read.find(VisitLog, { where: { siteId: site.id }, order: { number: 'DESC' } });
  return { logs, spans: countingSpans(logs.filter((log) => log.status === 'ready')) };
}

async function readDetail(deps: Dependencies, site: Site, logId: string) {
  const { logs, spans } = await readLogs(deps, site);
  const log = logs.find((candidate) => candidate.id === logId);
  if (!log) throw notFound('This log');
  const areas = await deps.database.read.find(CareArea, { where: { siteId: site.id }, order: { position: 'ASC' } });
  return presentVisitLogDetail(log, spans.get(log.number) ?? [], areas);
}
