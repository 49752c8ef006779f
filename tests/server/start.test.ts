import { mkdirSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { ConfigError } from '../../server/errors.ts';
import { Job } from '../../server/entities/Job.ts';
import { startServer } from '../../server/start.ts';
import { openDatabase } from '../../server/database/database.ts';
import { testConfig } from '../support/test-server.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-start-'));
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** A port that was free a moment ago. */
async function freePort(): Promise<number> {
  const probe = createServer().listen(0, '127.0.0.1');
  await new Promise((resolve) => probe.once('listening', resolve));
  const { port } = probe.address() as AddressInfo;
  await new Promise((resolve) => probe.close(resolve));
  return port;
}
async function config() {
  const port = await freePort();
  return { ...testConfig, dataDir: join(folder, 'data'), port, baseUrl: `http://127.0.0.1:${String(port)}` };
}

describe('a start', () => {
  test('makes the data folder for its own user alone, migrates, listens, and stops without a trace of a fault', async () => {
    const settings = await config();
    const server = await startServer(settings);
    expect(server.url).toBe(settings.baseUrl);
    expect((await fetch(`${settings.baseUrl}/healthz`)).status).toBe(200);
    expect((await fetch(`${settings.baseUrl}/readyz`)).status).toBe(200);
    expect(statSync(settings.dataDir).mode & 0o777).toBe(0o700);
    await server.stop();
    await expect(fetch(`${settings.baseUrl}/healthz`)).rejects.toThrow();
    // The write-ahead log was folded in: the database file alone is a whole copy.
    const database = await openDatabase(settings.dataDir);
    expect(await database.read.query('PRAGMA integrity_check')).toEqual([{ integrity_check: 'ok' }]);
    await database.close();
  });

  test('works the jobs that waited', async () => {
    const settings = await config();
    const database = await openDatabase(settings.dataDir);
    const job = { id: 'waiting', kind: 'unheard of', title: 'x', payload: 'null', status: 'queued' as const };
    const rest = {
      attempts: 0,
      maxAttempts: 1,
      runAfter: 0,
      progress: 0,
      progressText: '',
      createdBy: 'x',
      createdAt: 0,
    };
    await database.write((manager) => manager.insert(Job, { ...job, ...rest }));
    await database.close();
    const server = await startServer(settings);
    try {
      await server.deps.jobs.idle();
      expect(await server.deps.database.read.findOneByOrFail(Job, { id: job.id })).toMatchObject({ status: 'failed' });
    } finally {
      await server.stop();
    }
  });

  test('on a port in use ends with one line that names it, and leaves the database free', async () => {
    const settings = await config();
    const first = await startServer(settings);
    try {
      const second = startServer({ ...settings, dataDir: join(folder, 'other') });
      await expect(second).rejects.toThrow(ConfigError);
      await expect(second).rejects.toThrow(`Cannot start: PORT ${String(settings.port)} is in use.`);
    } finally {
      await first.stop();
    }
    const again = await startServer({ ...settings, dataDir: join(folder, 'other') });
    await again.stop();
  });

  test('with a data folder that cannot be made ends with one line that names it', async () => {
    const settings = await config();
    writeFileSync(join(folder, 'file'), '');
    const start = startServer({ ...settings, dataDir: join(folder, 'file', 'data') });
    await expect(start).rejects.toThrow(ConfigError);
    await expect(start).rejects.toThrow(/^Cannot start: DATA_DIR /);
  });

  test('with a database that is none ends, names the file’s folder, and leaves the file as it was', async () => {
    const settings = await config();
    mkdirSync(settings.dataDir);
    const file = join(settings.dataDir, 'shoalmark.sqlite');
    writeFileSync(file, 'this is a text and no database'.repeat(100));
    const start = startServer(settings);
    await expect(start).rejects.toThrow(ConfigError);
    await expect(start).rejects.toThrow(/^Cannot start: .*DATA_DIR/);
    expect(readFileSync(file, 'utf8')).toMatch(/^this is a text/);
  });
});
