import { monitorEventLoopDelay } from 'node:perf_hooks';
import { stat, statfs } from 'node:fs/promises';
import { In, LessThanOrEqual, MoreThan, Not, IsNull } from 'typeorm';
import type { ServerStatus } from '../../../shared/api/server-status.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { listBackups } from '../../database/backup-files.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { mailJobKind } from '../../mail/send-mail.job.ts';
import { softwareVersion } from '../../software-version.ts';
import { backupDirOf, backupJobKind } from './make-backup.job.ts';

const failedDays = 30;

const stalls = monitorEventLoopDelay({ resolution: 10 });
stalls.enable();
let stallsSince = Date.now();

/** The longest stall since the last minute began. */
function longestStall(): number {
  const longest = Math.max(0, stalls.max / 1e6 - 10);
  if (Date.now() - stallsSince > 60_000) {
    stalls.reset();
    stallsSince = Date.now();
  }
  return Math.round(longest * 10) / 10;
}

/** How the server is: everything an administrator looks at when something is slow or missing. */
export async function readServerStatus(deps: Dependencies, startedAt: number, now: number): Promise<ServerStatus> {
  const { config, database, jobs } = deps;
  const { read } = database;
  const size = async (file: string) => (await stat(file).catch(() => null))?.size ?? 0;
  const disk = await statfs(config.dataDir);
  const migrations = await read.query<{ name: string }[]>('SELECT name FROM migrations ORDER BY id');
  const failed = await read.find(Job, {
    where: { status: 'failed', endedAt: MoreThan(now - failedDays * 86_400) },
    relations: { site: true },
    order: { endedAt: 'DESC' },
    take: 50,
  });
  const oldest = await read.findOne(Job, {
    where: { status: 'queued', runAfter: LessThanOrEqual(now) },
    order: { runAfter: 'ASC' },
    select: { id: true, runAfter: true },
  });
  const sent = await read.findOne(Job, {
    where: { kind: mailJobKind, status: 'done' },
    order: { endedAt: 'DESC' },
    select: { id: true, endedAt: true },
  });
  const unsent = await read.findOne(Job, {
    where: { kind: mailJobKind, error: Not(IsNull()), status: In(['failed', 'queued']) },
    order: { startedAt: 'DESC' },
  });
  const dir = backupDirOf(config);
  return {
    now,
    startedAt,
    softwareVersion,
    engineVersion,
    nodeVersion: process.version,
    migrations: { done: migrations.length, newest: migrations.at(-1)?.name ?? '' },
    database: { bytes: await size(database.file), logBytes: await size(`${database.file}-wal`) },
    disk: { freeBytes: disk.bavail * disk.bsize, totalBytes: disk.blocks * disk.bsize },
    longestStallMilliseconds: longestStall(),
    memoryBytes: process.memoryUsage.rss(),
    queue: {
      queued: await read.countBy(Job, { status: 'queued' }),
      running: await read.countBy(Job, { status: 'running' }),
      oldestWaitsSince: oldest?.runAfter ?? null,
      failed: failed.map(({ id, kind, title, site, error, attempts, endedAt }) => ({
        ...{ id, kind, title, error, attempts, endedAt },
        siteName: site?.name ?? null,
        mayRetry: jobs.mayRetry(kind),
      })),
    },
    backups: {
      folder: dir,
      everyHours: config.backupEveryHours,
      keep: config.backupKeep,
      underWay: await read.existsBy(Job, { kind: backupJobKind, status: In(['queued', 'running']) }),
      files: (await listBackups(dir)).map(({ name, manifest: { madeAt, bytes, counts } }) => ({
        ...{ name, madeAt, bytes },
        rows: Object.values(counts).reduce((sum, count) => sum + count, 0),
      })),
    },
    mail: {
      set: config.smtpUrl !== null,
      from: config.mailFrom,
      lastSentAt: sent?.endedAt ?? null,
      waiting: await read.countBy(Job, { kind: mailJobKind, status: In(['queued', 'running']) }),
      lastFailure: unsent?.error ? { at: unsent.startedAt ?? unsent.createdAt, error: unsent.error } : null,
    },
  };
}
