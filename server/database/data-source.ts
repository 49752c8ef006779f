import 'reflect-metadata';
import { DataSource } from 'typeorm';
import { entities } from './entities.ts';
import { migrations } from './migrations/index.ts';

/** What is used of better-sqlite3's connection. */
export interface SqliteConnection {
  pragma(text: string, options?: { simple?: boolean }): unknown;
  exec(sql: string): unknown;
  readonly inTransaction: boolean;
}

/** The connection beneath TypeORM's. */
export function rawConnection(source: DataSource): SqliteConnection {
  return (source.driver as unknown as { databaseConnection: SqliteConnection }).databaseConnection;
}

/** How long a write waits for another process's lock. */
export const lockWaitMilliseconds = 5000;

/** The connection that writes. All use of it goes through the gate in write.ts. */
export function makeWriteSource(file: string): DataSource {
  return new DataSource({
    type: 'better-sqlite3',
    database: file,
    entities,
    migrations,
    migrationsTransactionMode: 'each',
    synchronize: false,
    enableWAL: true,
    timeout: lockWaitMilliseconds,
    prepareDatabase: (connection) => {
      const db = connection as SqliteConnection;
      db.pragma('synchronous = NORMAL');
      db.pragma('cache_size = -32000');
    },
  });
}

/** A second connection that can only read; it sees committed rows only. The file must exist. */
export function makeReadSource(file: string): DataSource {
  return new DataSource({
    type: 'better-sqlite3',
    database: file,
    entities,
    synchronize: false,
    readonly: true,
    fileMustExist: true,
    timeout: 5000,
    prepareDatabase: (connection) => {
      (connection as SqliteConnection).pragma('cache_size = -64000');
    },
  });
}
