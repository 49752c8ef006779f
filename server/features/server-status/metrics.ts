import { createHash, timingSafeEqual } from 'node:crypto';
import type { Request, RequestHandler } from 'express';
import { collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { HttpError, notFound } from '../../errors.ts';
import { listBackups } from '../../database/backup-files.ts';
import { softwareVersion } from '../../software-version.ts';
import { backupDirOf } from './make-backup.job.ts';

/** Figures of this server: process, requests by route, background work, backups. */
export interface Metrics {
  /** Times every request; put before everything else. */
  follow: RequestHandler;
  /** The figures as text, for a request that bears the token. */
  read(req: Request): Promise<{ type: string; text: string }>;
}

/** Nothing is gathered where no METRICS_TOKEN is set. */
export function makeMetrics(deps: Dependencies): Metrics {
  const { metricsToken } = deps.config;
  if (metricsToken === null) {
    return {
      follow: (_req, _res, next) => {
        next();
      },
      read: () => Promise.reject(notFound('This address')),
    };
  }
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const requests = new Histogram({
    name: 'shoalmark_request_duration_seconds',
    help: 'Time to answer, by route and status.',
    labelNames: ['method', 'route', 'status'],
    buckets: [0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 10],
    registers: [registry],
  });
  gatherWork(deps, registry);
  const digest = (text: string) => createHash('sha256').update(text).digest();
  const expected = digest(metricsToken);
  return {
    follow: (req, res, next) => {
      const end = requests.startTimer();
      res.once('finish', () => {
        // The route as it is written, so that no id becomes a label.
        const route = (req.route as { path?: unknown } | undefined)?.path;
        end({ method: req.method, route: typeof route === 'string' ? route : 'none', status: String(res.statusCode) });
      });
      next();
    },
    async read(req) {
      const given = /^bearer +(.*?) *$/i.exec(req.headers.authorization ?? '')?.[1] ?? '';
      if (!timingSafeEqual(digest(given), expected)) {
        req.res?.setHeader('www-authenticate', 'Bearer');
        throw new HttpError(401, 'Token refused', 'The figures need the token that METRICS_TOKEN names.', {
          next: 'Send it as Authorization: Bearer.',
        });
      }
      return { type: registry.contentType, text: await registry.metrics() };
    },
  };
}

function gatherWork({ database, config }: Dependencies, registry: Registry): void {
  new Gauge({
    name: 'shoalmark_info',
    help: 'The version that runs.',
    labelNames: ['version'],
    registers: [registry],
  }).set({ version: softwareVersion }, 1);
  new Gauge({
    name: 'shoalmark_jobs',
    help: 'Background work by state.',
    labelNames: ['status'],
    registers: [registry],
    async collect() {
      for (const status of ['queued', 'running', 'failed'] as const) {
        this.set({ status }, await database.read.countBy(Job, { status }));
      }
    },
  });
  new Gauge({
    name: 'shoalmark_last_backup_timestamp_seconds',
    help: 'When the newest whole backup was made; 0: there is none.',
    registers: [registry],
    async collect() {
      this.set((await listBackups(backupDirOf(config))).at(0)?.manifest.madeAt ?? 0);
    },
  });
}
