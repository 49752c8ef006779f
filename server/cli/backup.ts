import { readBackupSettings, readDataDir } from '../config.ts';
import { pruneBackups } from '../database/backup-files.ts';
import { checkDatabase } from '../database/check-database.ts';
import { databaseFile } from '../database/database.ts';
import { makeBackup } from '../database/make-backup.ts';

/** `npm run backup`: a checked backup of the database of DATA_DIR, with the server running or not. */
const dataDir = readDataDir(process.env);
const { dir, keep } = readBackupSettings(process.env);
try {
  const { file, manifest } = await makeBackup(databaseFile(dataDir), dir, Math.floor(Date.now() / 1000), checkDatabase);
  const pruned = await pruneBackups(dir, keep);
  process.stdout.write(
    `${file}: ${String(manifest.bytes)} bytes, checked, audit trail whole with ${String(manifest.chain.rows)} rows, newest digest ${manifest.chain.head}.${pruned > 0 ? ` ${String(pruned)} older deleted.` : ''}\n`,
  );
} catch (error) {
  process.stderr.write(`No backup was made: ${error instanceof Error ? error.message : String(error)}.\n`);
  process.exitCode = 1;
}
