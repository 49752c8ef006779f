import { chmod, mkdir, open, rename, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { softwareVersion } from '../software-version.ts';
import { backupName, manifestOf, type BackupFile } from './backup-files.ts';
import { hashFile, type DatabaseFacts } from './check-database.ts';

/** Pages copied in one go, under a millisecond's work; between them everything else has its turn. */
const pagesAtOnce = 128;

/**
 * Copies the database while it is in use, by SQLite's own backup, checks the copy and gives it its name: a backup
 * that bears one is whole.
 * @param check checks a file, away from the thread that answers requests
 * @param progress is told the share copied
 */
export async function makeBackup(
  source: string,
  dir: string,
  at: number,
  check: (file: string) => Promise<DatabaseFacts>,
  progress: (share: number) => void = () => undefined,
  signal?: AbortSignal,
): Promise<BackupFile> {
  await mkdir(dir, { recursive: true, mode: 0o700 });
  const name = backupName(at);
  const file = join(dir, name);
  const part = `${file}.part`;
  await rm(part, { force: true });
  try {
    await copy(source, part, progress, signal);
    // A file of its own, without a write-ahead log beside it.
    const copied = new Database(part);
    copied.pragma('journal_mode = DELETE');
    copied.close();
    await chmod(part, 0o600);
    const { counts, chain, migrations } = await check(part);
    const handle = await open(part, 'r+');
    await handle.sync();
    await handle.close();
    const { size } = await stat(part);
    const manifest = {
      madeAt: at,
      softwareVersion,
      bytes: size,
      sha256: await hashFile(part),
      counts,
      chain,
      migrations,
    };
    await writeFile(manifestOf(file), `${JSON.stringify(manifest, null, 2)}\n`, { mode: 0o600 });
    await rename(part, file);
    return { name, file, manifest };
  } catch (error) {
    await rm(part, { force: true }).catch(() => undefined);
    throw error;
  }
}

async function copy(
  source: string,
  part: string,
  progress: (share: number) => void,
  signal: AbortSignal | undefined,
): Promise<void> {
  const db = new Database(source, { readonly: true, fileMustExist: true });
  try {
    // Within one reading transaction the copy is of one moment, however much is written meanwhile.
    db.exec('BEGIN');
    db.prepare('SELECT count(*) FROM sqlite_master').get();
    await db.backup(part, {
      progress: ({ totalPages, remainingPages }) => {
        signal?.throwIfAborted();
        progress(totalPages === 0 ? 0 : 1 - remainingPages / totalPages);
        return pagesAtOnce;
      },
    });
    db.exec('COMMIT');
  } finally {
    db.close();
  }
}
