import { copyFile, mkdir, open, rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { In } from 'typeorm';
import { Job } from '../entities/Job.ts';
import { SessionRow } from '../entities/SessionRow.ts';
import { recordOwnAudit } from '../http/audit.ts';
import { readManifest } from './backup-files.ts';
import { checkDatabase, hashFile, type DatabaseFacts } from './check-database.ts';
import { databaseFile, openDatabase } from './database.ts';

/** Why nothing was restored, in words for the person at the command line. */
export class RestoreError extends Error {
  override name = 'RestoreError';
}

export interface Restored {
  facts: DatabaseFacts;
  /** Where the database went that was there before; null if there was none. */
  formerFile: string | null;
}

/**
 * Puts a backup in the place of the database, with the server stopped. The backup is checked first, and held
 * against its manifest; the database that was there is set aside, never deleted.
 * @throws RestoreError; then everything is as it was
 */
export async function restoreBackup(backup: string, dataDir: string, now: number): Promise<Restored> {
  const facts = await checkBackup(backup);
  await mkdir(dataDir, { recursive: true, mode: 0o700 });
  const target = databaseFile(dataDir);
  const incoming = join(dataDir, 'shoalmark.sqlite.restoring');
  const exists = (await stat(target).catch(() => null)) !== null;
  if (exists) refuseIfInUse(target);
  await rm(incoming, { force: true });
  await copyFile(backup, incoming);
  if ((await hashFile(incoming)) !== (await hashFile(backup))) {
    await rm(incoming, { force: true });
    throw new RestoreError('The copy of the backup is not the same as the backup: the disk is at fault.');
  }
  const handle = await open(incoming, 'r+');
  await handle.sync();
  await handle.close();
  const formerFile = exists ? `${target}.before-restore-${String(now)}` : null;
  if (formerFile !== null) await rename(target, formerFile);
  for (const suffix of ['-wal', '-shm']) await rm(`${target}${suffix}`, { force: true });
  await rename(incoming, target);
  // Opening brings an older backup to the newest schema.
  const database = await openDatabase(dataDir);
  try {
    await database.write(async (manager) => {
      // Sessions that were ended since the backup must not live again, nor mail that was sent since go out twice.
      await manager.deleteAll(SessionRow);
      await manager.update(
        Job,
        { kind: 'mail.send', status: In(['queued', 'running']) },
        { status: 'cancelled', error: 'Not sent: it may have been sent before the restore.', endedAt: now },
      );
      await recordOwnAudit(manager, {
        at: now,
        actor: 'command line',
        siteId: null,
        event: 'backup.restored',
        subject: facts.chain.head,
        detail: { rowsOfTrail: facts.chain.rows },
      });
    });
  } finally {
    await database.close();
  }
  const after = await checkDatabase(target);
  for (const [table, count] of Object.entries(facts.counts)) {
    const expected = table === 'audit_event' ? count + 1 : count;
    if (after.counts[table] !== undefined && after.counts[table] !== expected) {
      throw new RestoreError(
        `The restored database holds ${String(after.counts[table])} rows of ${table}, the backup ${String(count)}. The former database is ${formerFile ?? 'none'}.`,
      );
    }
  }
  return { facts, formerFile };
}

/** Checks a backup and holds it against its manifest, where there is one. */
export async function checkBackup(backup: string): Promise<DatabaseFacts> {
  const facts = await checkDatabase(backup).catch((error: unknown) => {
    throw new RestoreError(
      `${backup} cannot be restored: ${error instanceof Error ? error.message : String(error)}. Nothing was changed.`,
    );
  });
  const manifest = await readManifest(backup);
  if (!manifest) return facts;
  const same =
    manifest.sha256 === (await hashFile(backup)) &&
    manifest.chain.head === facts.chain.head &&
    JSON.stringify(manifest.counts) === JSON.stringify(facts.counts);
  if (same) return facts;
  throw new RestoreError(`${backup} is not what its manifest says: it was changed since. Nothing was changed.`);
}

/** Leaving the write-ahead log needs the file for oneself: that fails while any other process has it open. */
function refuseIfInUse(file: string): void {
  let db: Database.Database | null = null;
  try {
    db = new Database(file, { timeout: 200 });
    db.pragma('journal_mode = DELETE');
  } catch (error) {
    if (error instanceof Error && /locked|busy/i.test(error.message)) {
      throw new RestoreError('The database is in use: stop the server first. Nothing was changed.');
    }
    // A database that cannot be opened is the very reason for a restore: it is set aside as it is.
  } finally {
    db?.close();
  }
}
