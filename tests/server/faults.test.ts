import { spawn } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { Piscina } from 'piscina';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import { newId } from '../../server/database/new-id.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Census } from '../../server/entities/Census.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';
import { Job } from '../../server/entities/Job.ts';
import { fitModel, giveModel, readWholeModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/*
 * Faults from outside: no room, a lock, threads that die. Each must be told in plain words, leave nothing half stored,
 * and be over by itself once its cause is gone.
 */
let server: TestServer;
let built: BuiltSite;
let charge: SignedIn;
let administrator: SignedIn;
let fitted: ArrivalModelRow;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now: Date.parse('2026-09-21T14:13:20Z') / 1000, config: { threads: 2 } });
  const { database } = server.deps;
  built = await buildSite(database);
  const siteId = built.site.id;
  path = `/api/sites/${siteId}`;
  fitted = await fitModel(server, built, 9);
  await giveModel(database, fitted, built);
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }], 'Noor Charge')).id);
  administrator = await server.signedInAs((await buildPerson(database, [{ role: 'administrator' }])).id);
  const operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }])).id);
  expect((await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [14, 3]))).status).toBe(200);
});
afterAll(() => server.close());
beforeEach(() => {
  // A fault is told in the log; here it would only fill the screen.
  vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
});
afterEach(() => {
  vi.restoreAllMocks();
});

const census = (present: number) => ({
  takenAt: server.time.now,
  areas: built.areas.map(({ id }) => ({ areaId: id, present, waiting: 0, boarding: 0 })),
  undecidedWaiting: null,
  ambulancesHolding: null,
  arrivalsSinceMidnight: null,
});
const save = (present = 2) => charge.send('post', `${path}/censuses`, census(present));
const query = <Rows>(sql: string) => server.deps.database.write((manager) => manager.query<Rows>(sql));

describe('a disk without room', () => {
  /** SQLite then answers as it does on a full disk: SQLITE_FULL. */
  async function fill(): Promise<void> {
    const [{ page_count: pages }] = await query<{ page_count: number }[]>('PRAGMA page_count');
    await query(`PRAGMA max_page_count = ${String(pages)}`);
    // What free pages there are is used up.
    const { write } = server.deps.database;
    for (let size = 500_000; size >= 500; size /= 2) {
      for (let more = true; more;) {
        const row = { id: newId(), name: 'x'.repeat(size) };
        more = await write((manager) => manager.insert(HealthGroup, row)).then(
          () => true,
          () => false,
        );
      }
    }
  }
  const makeRoom = async () => {
    await query('PRAGMA max_page_count = 4294967294');
    await server.deps.database.write((manager) => manager.query('DELETE FROM health_group WHERE length(name) > 100'));
  };
  const stored = async () => [
    await server.deps.database.read.countBy(HealthGroup, {}),
    await server.deps.database.read.countBy(AuditEvent, {}),
  ];
  const makeGroup = () => administrator.send('post', '/api/installation/groups', { name: newId().padEnd(80, 'g') });

  test('a write answers 507 in plain words and stores nothing by halves; reading goes on; with room it works again', async () => {
    await fill();
    try {
      const before = await stored();
      let refused = 0;
      // Small rows find a place for a while; a refused one leaves neither itself nor its audit row.
      for (let i = 0; i < 60 && refused < 3; i += 1) {
        const kept = await stored();
        const reply = await makeGroup();
        if (reply.status === 201) continue;
        refused += 1;
        expect(reply.status, reply.text).toBe(507);
        expect(reply.body as Problem).toMatchObject({ title: 'No room', detail: 'The server’s disk is full.' });
        expect((reply.body as Problem).kept).toMatch(/^Nothing of this request was stored/);
        expect(reply.text).not.toContain('SQLITE');
        expect(await stored()).toEqual(kept);
      }
      expect(refused).toBe(3);
      const [groups, events] = await stored();
      expect(groups - before[0]).toBe(events - before[1]);
      expect((await charge.get(`${path}/tonight`)).status).toBe(200);
    } finally {
      await makeRoom();
    }
    expect((await makeGroup()).status).toBe(201);
    expect((await save()).status).toBe(201);
    expect(await server.deps.database.read.query('PRAGMA integrity_check')).toEqual([{ integrity_check: 'ok' }]);
  });

  test('a transaction that SQLite itself broke off does not swallow the next', async () => {
    const { write, read } = server.deps.database;
    const id = newId();
    // As SQLite does on some faults: the transaction is gone before TypeORM rolls it back.
    const broken = write(async (manager) => {
      await manager.insert(HealthGroup, { id, name: 'gone' });
      await manager.query('ROLLBACK');
      throw new Error('disk I/O error');
    });
    await expect(broken).rejects.toThrow('disk I/O error');
    const [kept, undone] = [newId(), newId()];
    await write((manager) => manager.insert(HealthGroup, { id: kept, name: 'kept' }));
    const failing = write(async (manager) => {
      await manager.insert(HealthGroup, { id: undone, name: 'undone' });
      throw new Error('refused');
    });
    await expect(failing).rejects.toThrow('refused');
    const found = async (each: string) => read.existsBy(HealthGroup, { id: each });
    expect(await Promise.all([id, kept, undone].map(found))).toEqual([false, true, false]);
  });
});

describe('a database that another process holds', () => {
  /** A process of its own takes the write lock; resolves to what lets it go again. */
  async function hold(): Promise<() => Promise<void>> {
    const program = fileURLToPath(new URL('../support/hold-database.js', import.meta.url));
    const child = spawn(process.execPath, [program, server.deps.database.file], { stdio: ['pipe', 'pipe', 'inherit'] });
    await new Promise((resolve) => child.stdout.once('data', resolve));
    return () =>
      new Promise((resolve) => {
        child.once('exit', () => {
          resolve();
        });
        child.stdin.end();
      });
  }
  const censuses = () => server.deps.database.read.countBy(Census, { siteId: built.site.id });

  test('a write waits for it, and meanwhile reading goes on', async () => {
    const release = await hold();
    const order: string[] = [];
    const saved = save(3).then((reply) => {
      order.push('saved');
      return reply;
    });
    for (let i = 0; i < 3; i += 1) {
      expect((await charge.get(`${path}/tonight`)).status).toBe(200);
      order.push('read');
    }
    await release();
    expect((await saved).status).toBe(201);
    expect(order).toEqual(['read', 'read', 'read', 'saved']);
  });

  test('for too long: 503 in plain words with when to come back, nothing stored; later it works again', async () => {
    const before = await censuses();
    const release = await hold();
    // Those that wait in the queue do not each wait anew.
    const replies = await Promise.all([save(4), save(5), save(6)]);
    await release();
    for (const reply of replies) {
      expect(reply.status, reply.text).toBe(503);
      expect(reply.headers['retry-after']).toBe('5');
      expect(reply.body as Problem).toMatchObject({
        title: 'Database in use',
        next: 'Wait a few seconds and send it again.',
      });
    }
    expect(await censuses()).toBe(before);
    expect((await save(4)).status).toBe(201);
    expect(await censuses()).toBe(before + 1);
  }, 20_000);
});

describe('a thread that dies in the middle', () => {
  /** Ends the thread that the next task runs on, right after it was given the task. */
  function killNext(): { killed: () => number } {
    // Called below with the pool it belongs to.
    // eslint-disable-next-line @typescript-eslint/unbound-method
    const run = Piscina.prototype.run as (this: Piscina, ...given: unknown[]) => Promise<unknown>;
    let killed = 0;
    vi.spyOn(Piscina.prototype, 'run').mockImplementation(function (this: Piscina, ...given) {
      const task = run.apply(this, given);
      if (killed === 0) {
        killed = 1;
        for (const thread of this.threads) void thread.terminate();
      }
      return task;
    });
    return { killed: () => killed };
  }

  test('of an outlook: the nurse who saved has the census kept and its outlook', async () => {
    // Warm threads, so that the task is on its way when its thread ends.
    expect((await save(1)).status).toBe(201);
    const { killed } = killNext();
    const reply = await save(7);
    expect(killed()).toBe(1);
    expect(reply.status, reply.text).toBe(201);
    expect(reply.body as object).toMatchObject({ reason: null, outlookId: expect.stringMatching(/./) as string });
  });

  test('of a fit: the job says what happened, is tried again and ends well', async () => {
    const warn = vi.spyOn(server.deps.logger, 'warn').mockImplementation(() => undefined);
    const role = [{ role: 'steward' as const, siteId: built.site.id }];
    const steward = await server.signedInAs((await buildPerson(server.deps.database, role)).id);
    killNext();
    const asked = await steward.send('post', `${path}/arrival-models`, {});
    expect(asked.status, asked.text).toBe(202);
    const { jobId, modelId } = asked.body as { jobId: string; modelId: string };
    await server.workJobs();
    const job = () => server.deps.database.read.findOneByOrFail(Job, { id: jobId });
    expect(await job()).toMatchObject({ status: 'queued', attempts: 1 });
    expect((await job()).error).toMatch(/^The thread that computed this ended in the middle/);
    expect(warn).toHaveBeenCalled();
    server.time.now += 10;
    await server.workJobs();
    expect(await job()).toMatchObject({ status: 'done', attempts: 2, error: null });
    expect((await readWholeModel(server.deps.database, modelId)).status).toBe('candidate');
  });

  test('for good: the census stays saved, the answer says that there is no outlook, and the next has one', async () => {
    const run = vi.spyOn(Piscina.prototype, 'run').mockRejectedValue(new Error('worker exited with code: 134'));
    const reply = await save(8);
    expect(reply.status, reply.text).toBe(201);
    expect(reply.body).toMatchObject({
      outlookId: null,
      reason: expect.stringMatching(/^The outlook could not be computed/) as string,
    });
    run.mockRestore();
    expect((await save(9)).body).toMatchObject({ reason: null });
  });
});
