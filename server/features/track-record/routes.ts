import type { Express } from 'express';
import { In } from 'typeorm';
import { getDrift, getTrackRecord, getTrackRecordCsv, recomputeRecord } from '../../../shared/api/track-record.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { conflict } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { presentDriftOfModelInUse } from './present-drift.ts';
import { presentRecord } from './read-record.ts';
import { recomputeJobKind, recomputePayload } from './recompute-record.job.ts';
import { recomputeFrom } from './recompute-times.ts';
import { sendScores } from './send-scores.ts';

/** The track record: how past forecasts did, the watch over the model in use, and past weeks recomputed on request. */
export function addTrackRecordRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { database, jobs } = deps;

  addSiteRoute(app, table, deps, getTrackRecord, ({ site, query, now }) => presentRecord(deps, site, query, now));

  addSiteRoute(app, table, deps, getTrackRecordCsv, (context) => sendScores(context));

  addSiteRoute(app, table, deps, getDrift, async ({ site }) => ({
    drift: await presentDriftOfModelInUse(database.read, site),
  }));

  addSiteRoute(app, table, deps, recomputeRecord, async (context) => {
    const { site, caller, body, now } = context;
    const logs = await database.read.findBy(VisitLog, { siteId: site.id, status: 'ready' });
    if (logs.length === 0) {
      throw conflict('There is no accepted visit log to recompute from.', 'A data steward loads one first.');
    }
    if (!(await readPlan(database.read, site.id))) {
      throw conflict(
        'There is no staffed-bed plan to hold the outlooks against.',
        'An operations manager saves one first.',
      );
    }
    const [live] = await database.read.query<{ firstAt: number | null }[]>(
      `SELECT min(issuedAt) AS firstAt FROM outlook WHERE siteId = ? AND "trigger" <> 'recomputed'`,
      [site.id],
    );
    const to = Math.min(live.firstAt ?? now, now);
    const from = recomputeFrom(Math.min(...logs.map((log) => log.periodFrom)), to, body.weeks);
    if (to - from < 7 * 86_400) {
      throw conflict(
        'The logs hold less than half a year before the first outlook: there is nothing to recompute.',
        'Load earlier visits, then ask again.',
      );
    }
    const jobId = await database.write(async (manager) => {
      const running = { siteId: site.id, kind: recomputeJobKind, status: In(['queued', 'running']) };
      if (await manager.existsBy(Job, running)) {
        throw conflict('The record of this site is being recomputed already.', 'Wait for it, or cancel it.');
      }
      if (await manager.existsBy(OutlookRow, { siteId: site.id, trigger: 'recomputed' })) {
        throw conflict(
          'Past weeks of this site were recomputed before; issued outlooks are never replaced.',
          'Nothing more to do.',
        );
      }
      const queued = await jobs.enqueue(manager, {
        kind: recomputeJobKind,
        title: 'Recompute the track record',
        siteId: site.id,
        payload: recomputePayload.parse({ siteId: site.id, from, to }),
        createdBy: caller.person.name,
      });
      await recordAudit(manager, context, 'track-record.recompute-asked', queued, { from, to });
      return queued;
    });
    return { jobId };
  });
}
