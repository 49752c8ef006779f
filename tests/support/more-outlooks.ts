import Database from 'better-sqlite3';
import { databaseFile } from '../../server/database/database.ts';
import { sumColumns, type ScoreValues } from '../../server/features/track-record/score-request.ts';
import work from '../../server/features/track-record/score.worker.ts';

const apartSeconds = 300;

/**
 * Brings a stopped server's database to a number of outlooks of tonight at a site at least: its recomputed ones are put beside
 * themselves again and again, some minutes later, with their distributions and scores; the weekly sums are then made anew by
 * the product's own code.
 * @returns the outlooks there are then
 */
export function multiplyOutlooks(dataDir: string, siteId: string, atLeast: number): number {
  const file = databaseFile(dataDir);
  const db = new Database(file);
  try {
    const count = () =>
      db.prepare<[string], { n: number }>('SELECT count(*) AS n FROM outlook WHERE siteId = ?').get(siteId)?.n ?? 0;
    // What was recomputed lies before what was issued at its time; the copies do as well.
    db.prepare(
      `CREATE TEMP TABLE copied AS SELECT id FROM outlook WHERE siteId = ? AND "trigger" = 'recomputed' AND issuedAt + 7200 <
       (SELECT coalesce(min(issuedAt), 9e9) FROM outlook WHERE siteId = ? AND "trigger" <> 'recomputed')`,
    ).run(siteId, siteId);
    const base = db.prepare<[], { n: number }>('SELECT count(*) AS n FROM copied').get()?.n ?? 0;
    if (base === 0) throw new Error('no outlook of this site was recomputed');
    const copy = (table: string, key: string, turn: number) => {
      const columns = db
        .prepare<[], { name: string }>(`SELECT name FROM pragma_table_info('${table}')`)
        .all()
        .map(({ name }) => name)
        .filter((name) => !(table === 'forecast_score' && name === 'id'));
      const values = columns.map((name) =>
        name === key
          ? `"${name}" || '-${String(turn)}'`
          : name === 'issuedAt'
            ? `"${name}" + ${String(turn * apartSeconds)}`
            : `"${name}"`,
      );
      const into = columns.map((name) => `"${name}"`).join(', ');
      db.exec(
        `INSERT INTO "${table}" (${into}) SELECT ${values.join(', ')} FROM "${table}"
         WHERE "${key}" IN (SELECT id FROM copied)`,
      );
    };
    for (let turn = 1; count() < atLeast; turn += 1) {
      copy('outlook', 'id', turn);
      copy('outlook_laws', 'outlookId', turn);
      copy('forecast_score', 'outlookId', turn);
    }
    const weeks = db
      .prepare<[string], { week: number }>('SELECT DISTINCT week FROM score_week WHERE siteId = ?')
      .all(siteId)
      .map(({ week }) => week);
    const sums = work({ kind: 'sum', databaseFile: file, siteId, weeks }) as ScoreValues[];
    const store = db.prepare(
      `INSERT OR REPLACE INTO score_week (${sumColumns.join(', ')}) VALUES (${sumColumns.map(() => '?').join(', ')})`,
    );
    db.transaction(() => {
      for (const row of sums) store.run(row);
    })();
    db.exec('ANALYZE; PRAGMA wal_checkpoint(TRUNCATE)');
    return count();
  } finally {
    db.close();
  }
}
