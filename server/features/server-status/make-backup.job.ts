import type { EntityManager } from 'typeorm';
import { In, LessThanOrEqual } from 'typeorm';
import { backupDirIn, type Config } from '../../config.ts';
import { listBackups, pruneBackups } from '../../database/backup-files.ts';
import type { DatabaseFacts } from '../../database/check-database.ts';
import { makeBackup } from '../../database/make-backup.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';

export const backupJobKind = 'backup.make';

/** Where the server's backups go. */
export function backupDirOf(config: Config): string {
  return config.backupDir ?? backupDirIn(config.dataDir);
}

/** Queues a backup within the caller's transaction; returns null if one waits or runs already. */
export async function enqueueBackup(
  { jobs }: Pick<Dependencies, 'jobs'>,
  manager: EntityManager,
  createdBy: string,
): Promise<string | null> {
  if (await manager.existsBy(Job, { kind: backupJobKind, status: In(['queued', 'running']) })) return null;
  return jobs.enqueue(manager, { kind: backupJobKind, title: 'Backup', siteId: null, payload: {}, createdBy });
}

/** Makes a checked backup while the server works, and deletes those that are too many. */
export function makeBackupKind({ config, database, clock, pool }: Dependencies): JobKind {
  return {
    retryable: true,
    async run({ signal, progress }) {
      const dir = backupDirOf(config);
      const check = (file: string) => {
        progress(0.7, 'Checking the copy');
        return pool.run<DatabaseFacts>(workerUrl(import.meta.url, 'check-database.worker'), file, { signal });
      };
      const copied = (share: number) => {
        progress(0.7 * share, 'Copying');
      };
      const { name, manifest } = await makeBackup(database.file, dir, clock(), check, copied, signal);
      await pruneBackups(dir, config.backupKeep);
      await database.write((manager) =>
        recordOwnAudit(manager, {
          at: clock(),
          actor: 'the timetable',
          siteId: null,
          event: 'backup.made',
          subject: name,
          detail: { bytes: manifest.bytes, rowsOfTrail: manifest.chain.rows, sha256: manifest.sha256 },
        }),
      );
    },
    async settle(manager, job, error) {
      await recordOwnAudit(manager, {
        at: clock(),
        actor: 'the timetable',
        siteId: null,
        event: 'backup.failed',
        subject: job.id,
        detail: { error },
      });
    },
  };
}

/** Asks for a backup when the newest is too old; after a failure not before an hour has passed. */
export async function askForBackup(deps: Dependencies): Promise<void> {
  const { backupEveryHours } = deps.config;
  if (backupEveryHours === 0) return;
  const now = deps.clock();
  const last = await deps.database.read.findOne(Job, {
    where: { kind: backupJobKind, createdAt: LessThanOrEqual(now) },
    order: { createdAt: 'DESC' },
  });
  if (last && last.createdAt > now - Math.min(3600, backupEveryHours * 3600)) return;
  // What bears a time to come is from before the clock was set back.
  const newest = (await listBackups(backupDirOf(deps.config))).find(({ manifest }) => manifest.madeAt <= now);
  if (newest && newest.manifest.madeAt > now - backupEveryHours * 3600) return;
  await deps.database.write((manager) => enqueueBackup(deps, manager, 'the timetable'));
}
