import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';
import Database from 'better-sqlite3';
import { verifyAuditChain, type ChainCheck } from './audit-chain.ts';

/** What a database file was found to hold. */
export interface DatabaseFacts {
  /** Rows by table; sessions left out, which end by themselves. */
  counts: Record<string, number>;
  chain: Pick<ChainCheck, 'whole' | 'rows' | 'head'>;
  /** Names of the migrations that it has had. */
  migrations: string[];
}

const leftOut = ['session', 'sqlite_sequence', 'migrations'];

/**
 * Checks a database file through and through: SQLite's own integrity check, foreign keys, the audit chain.
 * Blocks its thread: for the command line and worker threads.
 * @throws an Error that says what is wrong with the file
 */
export async function checkDatabase(file: string): Promise<DatabaseFacts> {
  const db = new Database(file, { readonly: true, fileMustExist: true });
  try {
    const integrity = db.pragma('integrity_check') as { integrity_check: string }[];
    if (integrity[0]?.integrity_check !== 'ok') {
      const said = integrity.slice(0, 3).map(({ integrity_check }) => integrity_check);
      throw new Error(`the file is damaged (${said.join('; ')})`);
    }
    const strays = db.pragma('foreign_key_check') as unknown[];
    if (strays.length > 0) throw new Error(`${String(strays.length)} rows refer to rows that are not there`);
    const tables = db
      .prepare<[], { name: string }>(
        "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' ORDER BY name",
      )
      .all()
      .map(({ name }) => name);
    if (!tables.includes('audit_event') || !tables.includes('migrations'))
      throw new Error('it is no database of Shoalmark');
    const counts: Record<string, number> = {};
    for (const name of tables) {
      if (leftOut.includes(name)) continue;
      counts[name] = db.prepare<[], { n: number }>(`SELECT count(*) AS n FROM "${name}"`).get()?.n ?? 0;
    }
    const { whole, rows, head, fault } = await verifyAuditChain({
      query: <Rows>(sql: string, values: unknown[] = []) => Promise.resolve(db.prepare(sql).all(...values) as Rows),
    });
    if (!whole) throw new Error(`its audit trail is not whole (${fault?.kind ?? ''} at row ${String(fault?.eventId)})`);
    const migrations = db.prepare<[], { name: string }>('SELECT name FROM migrations ORDER BY id').all();
    return { counts, chain: { whole, rows, head }, migrations: migrations.map(({ name }) => name) };
  } finally {
    db.close();
  }
}

/** SHA-256 of a file, hexadecimal. */
export async function hashFile(file: string): Promise<string> {
  const hash = createHash('sha256');
  await pipeline(createReadStream(file), hash);
  return hash.digest('hex');
}
