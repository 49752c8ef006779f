import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { makeWriteSource } from '../../server/database/data-source.ts';
import { databaseFile, openDatabase } from '../../server/database/database.ts';
import { Administration1796115000006 } from '../../server/database/migrations/1796115000006-Administration.ts';
import { migrations } from '../../server/database/migrations/index.ts';
import { verifyAuditChain } from '../../server/database/audit-chain.ts';
import { fillDatabase, readDatabase } from '../support/fill-database.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-upgrade-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** Rows of a trail that is chained by digests are written by the product alone; the first of them stands there from before. */
const chainedFrom = migrations.indexOf(Administration1796115000006);

/** A database as a version left it that knew the first so many migrations, with rows in every table. */
async function oldDatabase(known: number): Promise<void> {
  const source = makeWriteSource(databaseFile(folder));
  source.setOptions({ migrations: migrations.slice(0, known) });
  await source.initialize();
  await source.runMigrations();
  await source.destroy();
  const db = new Database(databaseFile(folder));
  db.pragma('foreign_keys = ON');
  // Everybody signs in again after the upgrade that tied sessions to people.
  fillDatabase(db, 3, known > chainedFrom ? ['session', 'audit_event', 'audit_note'] : ['session']);
  db.close();
}

describe('an upgrade from an older database with rows in every table', () => {
  test.each(migrations.slice(0, -1).map((migration, index) => [migration.name, index + 1] as const))(
    'as it was after %s: every row stays, with what it held, and the file is whole',
    async (_, known) => {
      await oldDatabase(known);
      const before = new Database(databaseFile(folder), { readonly: true });
      const old = readDatabase(before);
      before.close();
      const database = await openDatabase(folder);
      const chain = await verifyAuditChain(database.read);
      await database.close();
      const after = new Database(databaseFile(folder), { readonly: true });
      try {
        const now = readDatabase(after);
        for (const [table, rows] of old) {
          const found = now.get(table) ?? [];
          expect(found, table).toHaveLength(rows.length);
          // What an upgrade adds is of its own; what was there is as it was, unless a column is gone.
          const same = (row: Record<string, unknown>) =>
            Object.fromEntries(Object.entries(row).filter(([name]) => name in (found[0] ?? {})));
          for (const [index, row] of rows.entries()) expect(found[index], table).toMatchObject(same(row));
        }
        expect(old.size).toBeGreaterThan(10);
        expect(after.pragma('integrity_check')).toEqual([{ integrity_check: 'ok' }]);
        expect(after.pragma('foreign_key_check')).toEqual([]);
        expect(chain).toMatchObject({ whole: true, rows: known > chainedFrom ? 0 : 3 });
      } finally {
        after.close();
      }
    },
  );
});
