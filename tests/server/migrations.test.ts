import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { makeWriteSource } from '../../server/database/data-source.ts';
import { databaseFile, openDatabase, type Database } from '../../server/database/database.ts';
import { migrations } from '../../server/database/migrations/index.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';
import { Site } from '../../server/entities/Site.ts';

const folder = mkdtempSync(join(tmpdir(), 'shoalmark-migrations-'));
let database: Database;

beforeAll(async () => {
  database = await openDatabase(folder);
});
afterAll(async () => {
  await database.close();
  rmSync(folder, { recursive: true });
});

const pragma = (name: string) =>
  database.write(
    async (manager) => Object.values((await manager.query<object[]>(`PRAGMA ${name}`))[0] ?? {})[0] as unknown,
  );

test('the migrated schema is what the entities say', async () => {
  const source = await makeWriteSource(databaseFile(folder)).initialize();
  try {
    const { upQueries, downQueries } = await source.driver.createSchemaBuilder().log();
    expect(upQueries.map(({ query }) => query)).toEqual([]);
    expect(downQueries.map(({ query }) => query)).toEqual([]);
  } finally {
    await source.destroy();
  }
});

test('the migrations can be taken back to an empty database and run again', async () => {
  const other = mkdtempSync(join(tmpdir(), 'shoalmark-migrations-'));
  const source = await makeWriteSource(databaseFile(other)).initialize();
  try {
    const tables = async () =>
      (
        await source.query<{ name: string }[]>(
          "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' AND name <> 'migrations'",
        )
      ).map(({ name }) => name);
    await source.runMigrations();
    const full = await tables();
    expect(full).toContain('outlook');
    for (let left = migrations.length; left > 0; left -= 1) await source.undoLastMigration();
    expect(await tables()).toEqual([]);
    await source.runMigrations();
    expect(await tables()).toEqual(full);
  } finally {
    await source.destroy();
    rmSync(other, { recursive: true });
  }
});

test('the database is in WAL, with foreign keys on, and whole', async () => {
  expect(await pragma('journal_mode')).toBe('wal');
  expect(await pragma('foreign_keys')).toBe(1);
  expect(await pragma('integrity_check')).toBe('ok');
  expect(await database.read.query('PRAGMA foreign_key_check')).toEqual([]);
});

test('a row whose parent is not there is refused, and so is deleting a parent', async () => {
  const site = {
    id: 'somewhere',
    groupId: 'no such group',
    name: 'Somewhere',
    timeZone: 'UTC',
    country: 'GB',
    region: null,
    planningRisk: 0.1,
  };
  await expect(database.write((manager) => manager.insert(Site, site))).rejects.toThrow(/FOREIGN KEY/);
  expect(await database.read.countBy(Site, {})).toBe(0);
  await database.write(async (manager) => {
    await manager.insert(HealthGroup, { id: 'group', name: 'Group' });
    await manager.insert(Site, { ...site, groupId: 'group' });
  });
  await expect(database.write((manager) => manager.delete(HealthGroup, { id: 'group' }))).rejects.toThrow(
    /FOREIGN KEY/,
  );
  expect(await database.read.countBy(HealthGroup, {})).toBe(1);
});

test('the connection that reads cannot write', async () => {
  await expect(database.read.insert(HealthGroup, { id: 'x', name: 'x' })).rejects.toThrow(/readonly/);
});

test('opening it again finds everything as it was and runs no migration twice', async () => {
  const again = await openDatabase(folder);
  try {
    expect(await again.read.countBy(HealthGroup, {})).toBe(1);
    expect(await again.read.query('SELECT name FROM migrations')).toHaveLength(migrations.length);
  } finally {
    await again.close();
  }
});
