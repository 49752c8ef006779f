import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { DataSource, EntityManager } from 'typeorm';
import { makeReadSource, makeWriteSource } from './data-source.ts';
import { makeWriteGate, type WriteGate } from './write-gate.ts';

/** The database as the rest of the server sees it: one way to read, one way to write. */
export interface Database extends WriteGate {
  file: string;
  /** Committed rows only; cannot write. */
  read: EntityManager;
  close(): Promise<void>;
}

/** The database file within a data folder. */
export function databaseFile(dataDir: string): string {
  return join(dataDir, 'shoalmark.sqlite');
}

/** Writes a page that changes nothing. */
async function provesWritable(writer: DataSource): Promise<void> {
  const [{ user_version }] = await writer.query<{ user_version: number }[]>('PRAGMA user_version');
  await writer.query(`PRAGMA user_version = ${String(user_version)}`);
}

/** Opens the database, made if missing, and runs the migrations that it lacks. */
export async function openDatabase(dataDir: string): Promise<Database> {
  mkdirSync(dataDir, { recursive: true });
  const file = databaseFile(dataDir);
  const writer = await makeWriteSource(file).initialize();
  let reader: DataSource;
  try {
    await writer.runMigrations();
    // Nothing may be left to migrate: a file that can only be read is found out now, not by the first nurse who saves.
    await provesWritable(writer);
    reader = await makeReadSource(file).initialize();
  } catch (error) {
    await writer.destroy();
    throw error;
  }
  return {
    file,
    read: reader.manager,
    ...makeWriteGate(writer),
    async close() {
      await reader.destroy();
      await writer.destroy();
    },
  };
}
