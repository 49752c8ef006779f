import Database from 'better-sqlite3';
import { databaseFile } from '../../server/database/database.ts';

/**
 * Brings a stopped server's database to a number of visits at least: each site's newest log is put before itself again and
 * again, as older logs that count. What would purge them is set far back.
 * @returns the visits there are then
 */
export function multiplyVisits(dataDir: string, atLeast: number): number {
  const db = new Database(databaseFile(dataDir));
  try {
    const count = () => db.prepare<[], { n: number }>('SELECT count(*) AS n FROM visit').get()?.n ?? 0;
    db.exec('UPDATE site SET visitRetentionDays = 36500');
    const logs = db
      .prepare<[], { number: number; periodFrom: number; periodTo: number }>(
        `SELECT number, periodFrom, periodTo FROM visit_log WHERE status = 'ready' AND rows > 10000
         GROUP BY siteId HAVING number = min(number)`,
      )
      .all();
    const columns = (table: string) =>
      db
        .prepare<[], { name: string }>(`SELECT name FROM pragma_table_info('${table}')`)
        .all()
        .map(({ name }) => name);
    /** Copies rows of a table with some columns given another value. */
    const copy = (table: string, changed: Record<string, string>, where: string, values: Record<string, unknown>) => {
      const names = columns(table);
      const listed = names.map((name) => changed[name] ?? `"${name}"`).join(', ');
      const into = names.map((name) => `"${name}"`).join(', ');
      db.prepare(`INSERT INTO "${table}" (${into}) SELECT ${listed} FROM "${table}" WHERE ${where}`).run(values);
    };
    const earlier = (name: string) => `"${name}" - @back`;
    for (let round = 1; count() < atLeast; round += 1) {
      for (const { number, periodFrom, periodTo } of logs) {
        const next = db.prepare<[], { n: number }>('SELECT max(number) + 1 AS n FROM visit_log').get()?.n;
        // Whole weeks, so that the hours of the week stay what they are.
        const back = round * Math.ceil((periodTo - periodFrom) / 604_800) * 604_800;
        const values = { number, next, back };
        // A number is bound as a REAL and would read "9.0".
        const name = `'copy-' || CAST(@next AS INTEGER)`;
        const id = { id: name, number: '@next', sha256: name };
        const times = { periodFrom: earlier('periodFrom'), periodTo: earlier('periodTo') };
        copy('visit_log', { ...id, ...times }, 'number = @number', values);
        const moved = ['arrivalAt', 'bedSpaceAt', 'admissionDecisionAt', 'departureAt'].map((name) => [
          name,
          earlier(name),
        ]);
        copy(
          'visit',
          { ...(Object.fromEntries(moved) as Record<string, string>), logNumber: '@next' },
          'logNumber = @number',
          values,
        );
      }
    }
    db.exec('ANALYZE; PRAGMA wal_checkpoint(TRUNCATE)');
    return count();
  } finally {
    db.close();
  }
}
