import { resolve } from 'node:path';
import { readDataDir } from '../config.ts';
import { restoreBackup, RestoreError } from '../database/restore-backup.ts';

/** `npm run restore -- FILE`: puts a backup in the place of the database of DATA_DIR; the server must be stopped. */
const file = process.argv.at(2);
if (file === undefined) {
  process.stderr.write('Usage: npm run restore -- FILE (a backup; the server must be stopped)\n');
  process.exit(2);
}
try {
  const { facts, formerFile } = await restoreBackup(
    resolve(file),
    readDataDir(process.env),
    Math.floor(Date.now() / 1000),
  );
  const rows = Object.values(facts.counts).reduce((sum, count) => sum + count, 0);
  process.stdout.write(
    `Restored: ${String(rows)} rows in ${String(Object.keys(facts.counts).length)} tables, counts equal, audit trail whole with ${String(facts.chain.rows)} rows. ${formerFile === null ? 'There was no database before.' : `The former database is ${formerFile}.`} Everybody signs in again; machine tokens that were revoked since the backup work again: revoke them anew.\n`,
  );
} catch (error) {
  if (!(error instanceof RestoreError)) throw error;
  process.stderr.write(`${error.message}\n`);
  process.exitCode = 1;
}
