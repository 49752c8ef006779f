import type { Express } from 'express';
import { apiDescription, healthz, readyz } from '../../../shared/api/health.ts';
import {
  askBackup,
  getMetrics,
  getServerStatus,
  retryJob,
  sendTestMail as sendTestMailRoute,
} from '../../../shared/api/server-status.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { conflict, HttpError, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { describeApi } from '../../http/openapi.ts';
import { addRoute, type RouteTable } from '../../http/route.ts';
import { softwareVersion } from '../../software-version.ts';
import { enqueueBackup } from './make-backup.job.ts';
import type { Metrics } from './metrics.ts';
import { readServerStatus } from './read-status.ts';
import { sendTestMail } from './send-test-mail.ts';

/** Whether the server lives and can work, and the description of its API. */
export function addServerStatusRoutes(app: Express, table: RouteTable, deps: Dependencies, metrics: Metrics): void {
  addRoute(app, table, deps, healthz, () => Promise.resolve({ alive: true as const }));

  addRoute(app, table, deps, readyz, async () => {
    try {
      // A write that changes nothing still needs the write lock and a writable file.
      await deps.database.write((manager) => manager.query('DELETE FROM session WHERE sid = ?', ['']));
      return { ready: true };
    } catch (error) {
      deps.logger.error({ err: error }, 'the database cannot be written');
      throw new HttpError(503, 'Not ready', 'The database cannot be written.', { next: 'See the server’s log.' });
    }
  });

  addRoute(app, table, deps, getMetrics, async ({ req, res }) => {
    const { type, text } = await metrics.read(req);
    res.status(200).setHeader('cache-control', 'no-store').setHeader('content-type', type).send(text);
    return undefined;
  });

  let description: object | null = null;
  addRoute(app, table, deps, apiDescription, () => {
    description ??= describeApi(table.contracts, softwareVersion);
    return Promise.resolve(description as Record<string, unknown>);
  });
}

/** How the server is, for its administrator. Apart from the above, which need no session. */
export function addServerAdministrationRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const startedAt = deps.clock();

  addRoute(app, table, deps, getServerStatus, ({ now }) => readServerStatus(deps, startedAt, now));

  addRoute(app, table, deps, askBackup, async (context) => {
    const jobId = await deps.database.write(async (manager) => {
      const queued = await enqueueBackup(deps, manager, context.caller?.person.name ?? '');
      if (queued === null) throw conflict('A backup is under way already.', 'Wait until it has ended.');
      await recordAudit(manager, context, 'backup.asked', queued);
      return queued;
    });
    return { jobId };
  });

  addRoute(app, table, deps, retryJob, async (context) => {
    const { jobId } = context.params;
    const job = await deps.database.read.findOneBy(Job, { id: jobId });
    if (!job) throw notFound('This job');
    const queued = await deps.jobs.retry(jobId, (manager) =>
      recordAudit(manager, context, 'job.tried-again', jobId, { kind: job.kind }),
    );
    if (!queued) {
      throw conflict(
        'This job has not failed, or its kind cannot be tried again from here.',
        'Do again what started it.',
      );
    }
    return null;
  });

  addRoute(app, table, deps, sendTestMailRoute, (context) => sendTestMail(deps, context));
}
