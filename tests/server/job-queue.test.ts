import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { openDatabase, type Database } from '../../server/database/database.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';
import { Job } from '../../server/entities/Job.ts';
import { JobQueue, PermanentJobError, type JobContext, type JobKind, type JobSpec } from '../../server/jobs/queue.ts';
import { makeLogger } from '../../server/log.ts';

let folder: string;
let database: Database;
let queue: JobQueue;
const time = { now: 0 };
const logger = makeLogger('silent');

beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-jobs-'));
  database = await openDatabase(folder);
  time.now = 1_790_000_000;
  queue = newQueue();
});
afterEach(async () => {
  await queue.stop();
  await database.close();
  rmSync(folder, { recursive: true });
  vi.restoreAllMocks();
});

function newQueue() {
  return new JobQueue(database, () => time.now, logger);
}

function enqueue(more: Partial<JobSpec> = {}): Promise<string> {
  const spec = { kind: 'work', title: 'Work', siteId: null, payload: { size: 3 }, createdBy: 'Test' };
  return database.write((manager) => queue.enqueue(manager, { ...spec, ...more }));
}

const find = (id: string) => database.read.findOneByOrFail(Job, { id });
const start = (work: JobKind | JobKind['run']) =>
  queue.start({ work: typeof work === 'function' ? { run: work } : work });

/** A handler that waits until it is let go or aborted, and counts who runs. */
function heldWork() {
  const held = { running: 0, most: 0, started: 0, letGo: [] as (() => void)[] };
  const run = ({ signal }: JobContext) =>
    new Promise<void>((resolve, reject) => {
      held.started += 1;
      held.running += 1;
      held.most = Math.max(held.most, held.running);
      const end = (then: () => void) => () => {
        held.running -= 1;
        then();
      };
      held.letGo.push(end(resolve));
      signal.addEventListener(
        'abort',
        end(() => reject(new Error('aborted'))),
      );
    });
  return { held, run };
}

/** A settler that leaves a row of its own, so that a test sees in which transaction it ran. */
const settle: JobKind['settle'] = async (manager, job, error) => {
  await manager.insert(HealthGroup, { id: job.id, name: error });
};
const settled = (id: string) => database.read.findOneBy(HealthGroup, { id });

test('a job is done: its handler gets the payload, the row says so', async () => {
  const seen: unknown[] = [];
  await start(({ payload, job }) => {
    seen.push(payload, job.attempts);
    return Promise.resolve();
  });
  const id = await enqueue();
  await queue.idle();
  expect(seen).toEqual([{ size: 3 }, 1]);
  expect(await find(id)).toMatchObject({
    status: 'done',
    progress: 1,
    progressText: 'Done',
    attempts: 1,
    error: null,
    startedAt: time.now,
    endedAt: time.now,
    leaseUntil: null,
  });
});

test('a job whose transaction is rolled back never was', async () => {
  const run = vi.fn(() => Promise.resolve());
  await start(run);
  const failing = database.write(async (manager) => {
    await queue.enqueue(manager, { kind: 'work', title: 'x', siteId: null, payload: null, createdBy: 'x' });
    throw new Error('rolled back');
  });
  await expect(failing).rejects.toThrow('rolled back');
  await queue.idle();
  expect(run).not.toHaveBeenCalled();
  expect(await database.read.countBy(Job, {})).toBe(0);
});

test('a failure is tried again after pauses of 5, 20 and 80 s, then the job has failed and is settled', async () => {
  await start({ run: ({ job }) => Promise.reject(new Error(`attempt ${job.attempts}`)), settle });
  const id = await enqueue({ maxAttempts: 4 });
  for (const [index, pause] of [5, 20, 80].entries()) {
    await queue.idle();
    expect(await find(id)).toMatchObject({
      status: 'queued',
      attempts: index + 1,
      runAfter: time.now + pause,
      error: `attempt ${index + 1}`,
      endedAt: null,
    });
    expect(await settled(id)).toBeNull();
    time.now += pause - 1;
    await queue.idle();
    expect((await find(id)).attempts).toBe(index + 1);
    time.now += 1;
  }
  await queue.idle();
  expect(await find(id)).toMatchObject({ status: 'failed', attempts: 4, error: 'attempt 4', endedAt: time.now });
  expect((await settled(id))?.name).toBe('attempt 4');
});

test('a retry that succeeds leaves no error behind', async () => {
  await start(({ job }) => (job.attempts === 1 ? Promise.reject(new Error('once')) : Promise.resolve()));
  const id = await enqueue();
  await queue.idle();
  time.now += 5;
  await queue.idle();
  expect(await find(id)).toMatchObject({ status: 'done', attempts: 2, error: null });
});

test('a failure that a retry cannot mend is not tried again', async () => {
  await start({ run: () => Promise.reject(new PermanentJobError('too little history')), settle });
  const id = await enqueue();
  await queue.idle();
  expect(await find(id)).toMatchObject({ status: 'failed', attempts: 1, error: 'too little history' });
  expect((await settled(id))?.name).toBe('too little history');
});

test('a kind that nobody handles fails and says so', async () => {
  await start(() => Promise.resolve());
  const id = await enqueue({ kind: 'unheard of' });
  await queue.idle();
  expect(await find(id)).toMatchObject({ status: 'failed', error: 'No handler for jobs of kind unheard of.' });
});

test('a job for later waits for its time', async () => {
  await start(() => Promise.resolve());
  const id = await enqueue({ runAfter: time.now + 60 });
  await queue.idle();
  expect((await find(id)).status).toBe('queued');
  time.now += 60;
  await queue.idle();
  expect((await find(id)).status).toBe('done');
});

test('two run at once at most; idle() waits for the rest', async () => {
  const { held, run } = heldWork();
  await start(run);
  for (let i = 0; i < 5; i += 1) await enqueue();
  let idle = false;
  const waiting = queue.idle().then(() => {
    idle = true;
  });
  for (let done = 0; done < 5; done += 1) {
    await expect.poll(() => held.started).toBe(Math.min(5, done + 2));
    expect(idle).toBe(false);
    held.letGo[done]();
  }
  await waiting;
  expect(held.most).toBe(2);
  expect(await database.read.countBy(Job, { status: 'done' })).toBe(5);
});

test('progress is written while it runs, within 0 and 1, and the lease is renewed', async () => {
  const { held, run } = heldWork();
  await start((context) => {
    context.progress(-1, 'under');
    context.progress(0.4, 'Two of five');
    return run(context);
  });
  const id = await enqueue();
  await expect.poll(async () => (await find(id)).progressText, { timeout: 5000 }).toBe('Two of five');
  expect(await find(id)).toMatchObject({ status: 'running', progress: 0.4 });
  time.now += 100;
  await expect.poll(async () => (await find(id)).leaseUntil, { timeout: 5000 }).toBe(time.now + 60);
  held.letGo[0]();
  await queue.idle();
});

describe('cancelling', () => {
  test('a job that waits: it never runs, and is settled', async () => {
    const run = vi.fn(() => Promise.resolve());
    const id = await enqueue({ runAfter: time.now + 10 });
    await start({ run, settle });
    expect(await queue.cancel(id)).toBe(true);
    expect(await find(id)).toMatchObject({ status: 'cancelled', error: 'Cancelled.', endedAt: time.now });
    expect((await settled(id))?.name).toBe('Cancelled.');
    time.now += 10;
    await queue.idle();
    expect(run).not.toHaveBeenCalled();
    expect(await queue.cancel(id)).toBe(false);
  });

  test('a job that runs: its signal aborts, it stays cancelled whatever the handler then does', async () => {
    const { held, run } = heldWork();
    await start({ run, settle });
    const id = await enqueue();
    await expect.poll(() => held.running).toBe(1);
    expect(await queue.cancel(id)).toBe(true);
    await queue.idle();
    expect(held.running).toBe(0);
    expect(await find(id)).toMatchObject({ status: 'cancelled', attempts: 1 });
    expect((await settled(id))?.name).toBe('Cancelled.');
  });

  test('a handler that does not listen and ends well does not make it done', async () => {
    let letGo: () => void = () => undefined;
    await start({ run: () => new Promise<void>((resolve) => (letGo = resolve)) });
    const id = await enqueue();
    await expect.poll(async () => (await find(id)).status).toBe('running');
    await queue.cancel(id);
    letGo();
    await queue.idle();
    expect((await find(id)).status).toBe('cancelled');
  });

  test('the settling and what is done alongside are of one transaction with it: all or nothing', async () => {
    const { held, run } = heldWork();
    await start({ run, settle });
    const id = await enqueue();
    await expect.poll(() => held.running).toBe(1);
    const failing = queue.cancel(id, () => Promise.reject(new Error('no audit row')));
    await expect(failing).rejects.toThrow('no audit row');
    expect((await find(id)).status).toBe('running');
    expect(await settled(id)).toBeNull();
    expect(held.running).toBe(1);
    await queue.cancel(id, async (manager) => {
      await manager.insert(HealthGroup, { id: 'alongside', name: 'audit' });
    });
    expect(await settled('alongside')).not.toBeNull();
    await queue.idle();
  });

  test('a settler that fails leaves the job as it was', async () => {
    const id = await enqueue({ runAfter: time.now + 10 });
    await start({ run: () => Promise.resolve(), settle: () => Promise.reject(new Error('cannot tidy')) });
    await expect(queue.cancel(id)).rejects.toThrow('cannot tidy');
    expect((await find(id)).status).toBe('queued');
  });
});

describe('a restart', () => {
  test('after a stop: what ran is queued again and the broken-off attempt does not count', async () => {
    const { held, run } = heldWork();
    await start({ run, settle });
    const id = await enqueue({ maxAttempts: 1 });
    await expect.poll(() => held.running).toBe(1);
    await queue.stop();
    expect(await find(id)).toMatchObject({ status: 'queued', attempts: 0, leaseUntil: null, error: null });
    queue = newQueue();
    await start(() => Promise.resolve());
    await queue.idle();
    expect(await find(id)).toMatchObject({ status: 'done', attempts: 1 });
  });

  test('after a crash: queued again while attempts are left, failed and settled when they are not', async () => {
    const again = await enqueue({ maxAttempts: 2 });
    const over = await enqueue({ maxAttempts: 1 });
    // What a process that died in the middle leaves.
    await database.write((manager) =>
      manager.update(Job, { status: 'queued' }, { status: 'running', attempts: 1, leaseUntil: 1 }),
    );
    await start({ run: () => Promise.resolve(), settle });
    await queue.idle();
    expect(await find(again)).toMatchObject({ status: 'done', attempts: 2 });
    expect(await find(over)).toMatchObject({ status: 'failed', error: 'The server stopped while this ran.' });
    expect(await settled(again)).toBeNull();
    expect(await settled(over)).not.toBeNull();
  });

  test('nothing runs before the start and after the stop', async () => {
    const run = vi.fn(() => Promise.resolve());
    const first = await enqueue();
    expect((await find(first)).status).toBe('queued');
    await start(run);
    await queue.idle();
    await queue.stop();
    const second = await enqueue();
    await new Promise((resolve) => setTimeout(resolve, 30));
    expect((await find(second)).status).toBe('queued');
    expect(run).toHaveBeenCalledTimes(1);
  });
});

test('a database that does not take the end of a job is reported, and the queue goes on', async () => {
  const log = vi.spyOn(logger, 'error').mockImplementation(() => undefined);
  const write = database.write;
  let full = false;
  database.write = (work) => (full ? Promise.reject(new Error('database or disk is full')) : write(work));
  await start(() => {
    full = true;
    return Promise.resolve();
  });
  const id = await enqueue();
  await expect.poll(() => log.mock.calls.length).toBe(1);
  full = false;
  expect((await find(id)).status).toBe('running');
  const next = newQueue();
  await queue.stop();
  queue = next;
  await start(() => Promise.resolve());
  await queue.idle();
  expect((await find(id)).status).toBe('done');
});
