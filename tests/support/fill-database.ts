import type Database from 'better-sqlite3';

interface Column {
  name: string;
  type: string;
  notnull: number;
  pk: number;
}

interface ForeignKey {
  table: string;
  from: string;
  to: string | null;
}

const tablesOf = (db: Database.Database) =>
  db
    .prepare<[], { name: string }>(
      "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' AND name <> 'migrations' ORDER BY name",
    )
    .all()
    .map(({ name }) => name);
const columnsOf = (db: Database.Database, table: string) =>
  db.prepare<[], Column>(`SELECT name, type, "notnull", pk FROM pragma_table_info('${table}')`).all();
const foreignKeysOf = (db: Database.Database, table: string) =>
  db.prepare<[], ForeignKey>(`SELECT "table", "from", "to" FROM pragma_foreign_key_list('${table}')`).all();

/**
 * Puts rows into every table of a migrated database, whatever its version, by what its schema says: parents first, foreign
 * keys to rows that are there, numbers and texts that differ from row to row. Texts are JSON, since many columns hold that.
 * @param except tables that stay empty
 */
export function fillDatabase(db: Database.Database, rows: number, except: readonly string[]): void {
  const left = new Set(tablesOf(db).filter((table) => !except.includes(table)));
  while (left.size > 0) {
    const before = left.size;
    for (const table of left) {
      const keys = foreignKeysOf(db, table);
      if (keys.some((key) => key.table !== table && left.has(key.table))) continue;
      left.delete(table);
      const columns = columnsOf(db, table);
      const names = columns.map(({ name }) => `"${name}"`).join(', ');
      const insert = db.prepare(`INSERT INTO "${table}" (${names}) VALUES (${columns.map(() => '?').join(', ')})`);
      for (let row = 1; row <= rows; row += 1) {
        insert.run(
          columns.map(({ name, type, notnull }) => {
            const key = keys.find(({ from }) => from === name);
            // A row that refers to its own table stands alone.
            if (key?.table === table && notnull === 0) return null;
            const of = key ? columnsOf(db, key.table).find((each) => each.name === (key.to ?? 'id')) : null;
            const kind = (of?.type ?? type).toLowerCase();
            return kind === 'text' || kind === 'varchar' ? JSON.stringify({ row }) : row;
          }),
        );
      }
    }
    if (left.size === before) throw new Error(`tables that refer to each other: ${[...left].join(', ')}`);
  }
}

/** Every row of every table, by table. */
export function readDatabase(db: Database.Database): Map<string, Record<string, unknown>[]> {
  return new Map(
    tablesOf(db).map((table) => [
      table,
      db.prepare<[], Record<string, unknown>>(`SELECT * FROM "${table}" ORDER BY 1, 2`).all(),
    ]),
  );
}
