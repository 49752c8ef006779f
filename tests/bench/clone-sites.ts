import Database from 'better-sqlite3';

type Row = Record<string, unknown>;

/**
 * Adds sites like one that is there to a database in use: its areas, shifts, plan in force, approved model and the roles
 * that people hold at it; none of its visits or outlooks.
 * @returns the new sites' ids
 */
export function cloneSites(file: string, siteId: string, times: number): string[] {
  const db = new Database(file, { timeout: 10_000 });
  const made: string[] = [];
  try {
    const rows = (sql: string) => db.prepare<[string], Row>(sql).all(siteId);
    const tables: [name: string, rows: Row[]][] = [
      ['site', rows('SELECT * FROM site WHERE id = ?')],
      ['care_area', rows('SELECT * FROM care_area WHERE siteId = ?')],
      ['shift', rows('SELECT * FROM shift WHERE siteId = ?')],
      ['staffed_bed_plan', rows('SELECT * FROM staffed_bed_plan WHERE siteId = ? ORDER BY version DESC LIMIT 1')],
      [
        'staffed_bed_plan_area',
        rows(
          `SELECT * FROM staffed_bed_plan_area WHERE planId =
           (SELECT id FROM staffed_bed_plan WHERE siteId = ? ORDER BY version DESC LIMIT 1)`,
        ),
      ],
      [
        'arrival_model',
        rows(`SELECT * FROM arrival_model WHERE siteId = ? AND approvedAt IS NOT NULL AND retiredAt IS NULL`),
      ],
      ['membership', rows('SELECT * FROM membership WHERE siteId = ?')],
    ];
    for (let copy = 1; copy <= times; copy += 1) {
      const id = `bench-${String(copy)}`;
      // Ids of areas and shifts begin with the site's; those of the other rows are random.
      const moved = (name: string, column: string, value: unknown): unknown => {
        if (typeof value !== 'string') return value;
        if (column === 'parameters' || column === 'detail' || column === 'lineage') return value;
        if (value.includes(siteId)) return value.replaceAll(siteId, id);
        const own = column === 'planId' || (column === 'id' && name !== 'site');
        return own ? `${id}-${value}` : value;
      };
      db.transaction(() => {
        for (const [name, copied] of tables) {
          for (const row of copied) {
            const columns = Object.keys(row);
            const values = columns.map((column) => moved(name, column, row[column]));
            const list = columns.map((column) => `"${column}"`).join(', ');
            db.prepare(`INSERT INTO "${name}" (${list}) VALUES (${columns.map(() => '?').join(', ')})`).run(values);
          }
        }
        db.prepare('UPDATE site SET name = ? WHERE id = ?').run(`Site ${String(copy)}`, id);
      })();
      made.push(id);
    }
  } finally {
    db.close();
  }
  return made;
}
