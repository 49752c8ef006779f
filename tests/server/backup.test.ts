import { appendFileSync, copyFileSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { setImmediate as nextTurn } from 'node:timers/promises';
import Database from 'better-sqlite3';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { listBackups, manifestOf, pruneBackups } from '../../server/database/backup-files.ts';
import { checkDatabase } from '../../server/database/check-database.ts';
import { databaseFile, openDatabase, type Database as OpenDatabase } from '../../server/database/database.ts';
import { makeBackup } from '../../server/database/make-backup.ts';
import { restoreBackup, RestoreError } from '../../server/database/restore-backup.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';
import { Job } from '../../server/entities/Job.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { askForBackup, backupJobKind } from '../../server/features/server-status/make-backup.job.ts';
import { recordOwnAudit } from '../../server/http/audit.ts';
import { makeTempFolder, removeTempFolder } from '../support/temp-folder.ts';
import { openTestServer } from '../support/test-server.ts';

let folder: string;
let database: OpenDatabase;
let dir: string;
const data = () => join(folder, 'data');
const source = () => databaseFile(data());

beforeEach(async () => {
  folder = makeTempFolder('backup');
  dir = join(folder, 'backups');
  database = await openDatabase(data());
  for (let i = 0; i < 50; i += 1) await write(i);
});
afterEach(async () => {
  await database.close().catch(() => undefined);
  removeTempFolder(folder);
});

/** One change with its audit row, in one transaction: a copy that splits it would be told by the counts. */
async function write(i: number): Promise<void> {
  await database.write(async (manager) => {
    await manager.insert(HealthGroup, { id: `g${String(i)}`, name: 'x'.repeat(3000) });
    const event = { at: i, actor: 'Test', siteId: null, event: 'site.group-made', subject: `g${String(i)}` };
    await recordOwnAudit(manager, event);
  });
}
const backup = (at = 1_800_000_000) => makeBackup(source(), dir, at, checkDatabase);

describe('a backup', () => {
  test('taken while others write is of one moment, whole, and bears what it holds', async () => {
    let writing = true;
    let written = 50;
    const writer = (async () => {
      while (writing) {
        await write(written++);
        // Writes alone would leave the copy no turn.
        await nextTurn();
      }
    })();
    const { file, manifest } = await backup();
    writing = false;
    await writer;
    expect(written).toBeGreaterThan(51);
    expect(await checkDatabase(file)).toMatchObject({ counts: manifest.counts, chain: manifest.chain });
    expect(manifest.counts.health_group).toBe(manifest.counts.audit_event);
    expect(manifest.counts.health_group).toBeGreaterThanOrEqual(50);
    expect(statSync(file).mode & 0o077).toBe(0);
    expect(readdirSync(dir).toSorted()).toEqual(['shoalmark-20270115-080000.json', 'shoalmark-20270115-080000.sqlite']);
  });

  test('of a damaged copy is never given a name, and leaves nothing behind', async () => {
    const bad = makeBackup(source(), dir, 1, () => Promise.reject(new Error('the file is damaged')));
    await expect(bad).rejects.toThrow('damaged');
    expect(readdirSync(dir)).toEqual([]);
  });

  test('is kept with the newest others; older ones and the rest of an interrupted one go', async () => {
    for (const at of [1, 2, 3, 4]) await backup(1_800_000_000 + at);
    writeFileSync(join(dir, 'shoalmark-20270101-000000.sqlite.part'), 'half');
    writeFileSync(join(dir, 'not-ours.txt'), 'kept');
    expect(await pruneBackups(dir, 2)).toBe(2);
    expect((await listBackups(dir)).map(({ manifest }) => manifest.madeAt)).toEqual([1_800_000_004, 1_800_000_003]);
    expect(readdirSync(dir)).toHaveLength(5);
    expect(readdirSync(dir)).toContain('not-ours.txt');
  });
});

describe('a restore', () => {
  test('brings every row back, keeps what was there, ends sessions and does not send mail again', async () => {
    await database.write(async (manager) => {
      await manager.insert(SessionRow, { sid: 'old', expiresAt: 4e9, data: '{}', personId: null });
      const job = { id: 'mail', kind: 'mail.send', title: 'x', payload: '{}', status: 'queued' as const };
      await manager.insert(Job, {
        ...job,
        ...{ attempts: 0, maxAttempts: 1, runAfter: 0, progress: 0, progressText: '', createdBy: 'x', createdAt: 0 },
      });
    });
    const { file, manifest } = await backup();
    await write(77);
    await database.close();
    const { facts, formerFile } = await restoreBackup(file, data(), 1_800_000_100);
    expect(facts.counts).toEqual(manifest.counts);
    database = await openDatabase(data());
    expect(await database.read.countBy(HealthGroup, {})).toBe(50);
    expect(await database.read.countBy(SessionRow, {})).toBe(0);
    expect((await database.read.findOneByOrFail(Job, { id: 'mail' })).status).toBe('cancelled');
    const newest = await database.read.find(AuditEvent, { order: { id: 'DESC' }, take: 1 });
    expect(newest[0]).toMatchObject({ event: 'backup.restored', subject: manifest.chain.head });
    const former = new Database(formerFile ?? '', { readonly: true });
    expect(former.prepare('SELECT count(*) AS n FROM health_group').get()).toEqual({ n: 51 });
    former.close();
  });

  test('is refused while the server has the database open', async () => {
    const { file } = await backup();
    await expect(restoreBackup(file, data(), 1)).rejects.toThrow(/in use: stop the server first/);
    await write(99);
    expect(await database.read.countBy(HealthGroup, {})).toBe(51);
  });

  test.each<[string, (file: string) => void, RegExp]>([
    [
      'cut short',
      (file) => {
        const whole = readFileSync(file);
        writeFileSync(file, whole.subarray(0, Math.floor(whole.length / 2)));
      },
      /cannot be restored/,
    ],
    ['that is no database', (file) => writeFileSync(file, 'nothing'), /cannot be restored/],
    ['with bytes added', (file) => appendFileSync(file, 'x'.repeat(4096)), /is not what its manifest says/],
    [
      'that somebody changed',
      (file) => {
        const db = new Database(file);
        db.exec("UPDATE health_group SET name = 'other' WHERE id = 'g1'");
        db.close();
      },
      /is not what its manifest says/,
    ],
    [
      'whose audit trail was changed',
      (file) => {
        const db = new Database(file);
        db.exec("DROP TRIGGER audit_event_no_update; UPDATE audit_event SET actor = 'Nobody' WHERE id = 3");
        db.close();
      },
      /audit trail is not whole \(row altered at row 3\)/,
    ],
  ])('of a file %s is refused, and everything stays as it was', async (_, damage, message) => {
    const { file } = await backup();
    const copy = join(folder, 'damaged.sqlite');
    copyFileSync(file, copy);
    copyFileSync(manifestOf(file), manifestOf(copy));
    damage(copy);
    await database.close();
    const before = readFileSync(source());
    const refused = restoreBackup(copy, data(), 1);
    await expect(refused).rejects.toThrow(RestoreError);
    await expect(refused).rejects.toThrow(message);
    expect(readFileSync(source()).equals(before)).toBe(true);
    database = await openDatabase(data());
  });

  test('into an empty folder works, as on a new machine', async () => {
    const { file } = await backup();
    const fresh = join(folder, 'fresh');
    expect((await restoreBackup(file, fresh, 5)).formerFile).toBeNull();
    const opened = await openDatabase(fresh);
    expect(await opened.read.countBy(HealthGroup, {})).toBe(50);
    await opened.close();
  });
});

test('the timetable asks for a backup when the newest is too old, and the job makes and prunes', async () => {
  const server = await openTestServer({ config: { backupEveryHours: 24, backupKeep: 2, backupDir: dir } });
  try {
    for (let day = 0; day < 4; day += 1) {
      await askForBackup(server.deps);
      await askForBackup(server.deps);
      await server.workJobs();
      server.time.now += 12 * 3600;
      await askForBackup(server.deps);
      await server.workJobs();
      server.time.now += 12 * 3600;
    }
    const jobs = await server.deps.database.read.findBy(Job, { kind: backupJobKind });
    expect(jobs.map(({ status, error }) => [status, error])).toEqual(Array(4).fill(['done', null]));
    expect(await listBackups(dir)).toHaveLength(2);
    expect(await server.deps.database.read.countBy(AuditEvent, { event: 'backup.made' })).toBe(4);
  } finally {
    await server.close();
  }
});
