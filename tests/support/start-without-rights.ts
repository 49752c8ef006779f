import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { openDatabase } from '../../server/database/database.ts';
import { runServer } from '../../server/start.ts';

/**
 * Starts the server as somebody whom the permissions of files bind, which they do not bind root. Everything that a start
 * loads is loaded before, since the checkout may be closed to others. Arguments: data folders, tried one after the other.
 */
const folder = mkdtempSync(join(tmpdir(), 'shoalmark-rights-'));
await (await openDatabase(folder)).close();
rmSync(folder, { recursive: true });
if (process.geteuid?.() === 0) {
  process.setegid?.(65_534);
  process.seteuid?.(65_534);
}
for (const DATA_DIR of process.argv.slice(2)) await runServer({ ...process.env, DATA_DIR });
