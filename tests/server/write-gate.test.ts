import { AsyncLocalStorage } from 'node:async_hooks';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { DataSource } from 'typeorm';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { makeWriteSource } from '../../server/database/data-source.ts';
import { makeWriteGate, type Write } from '../../server/database/write-gate.ts';
import { HealthGroup } from '../../server/entities/HealthGroup.ts';

let folder: string;
let source: DataSource;
let write: Write;

beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), 'shoalmark-gate-'));
  source = await makeWriteSource(join(folder, 'gate.sqlite')).initialize();
  await source.runMigrations();
  ({ write } = makeWriteGate(source));
});
afterEach(async () => {
  await source.destroy();
  rmSync(folder, { recursive: true });
});

/** Lets every other waiting callback run, as a wait for anything outside the database does. */
const pause = () => new Promise((resolve) => setTimeout(resolve, 5));
const row = (id: string) => ({ id, name: id });
const stored = async () => (await source.manager.find(HealthGroup, { order: { id: 'ASC' } })).map(({ id }) => id);

/** A write that waits between two rows, so that others have every chance to come between. */
function slowWrite(gate: Write, id: string, fails = false) {
  return gate(async (manager) => {
    await manager.insert(HealthGroup, row(`${id}1`));
    await pause();
    await manager.insert(HealthGroup, row(`${id}2`));
    if (fails) throw new Error(`${id} fails`);
  });
}

describe('without a gate', () => {
  test('a write that succeeded is lost with one that failed: what the gate is for', async () => {
    let insert: Promise<unknown> = Promise.resolve();
    const failing = source.transaction(async (manager) => {
      await manager.insert(HealthGroup, row('a'));
      insert = source.manager.insert(HealthGroup, row('b'));
      await pause();
      throw new Error('a fails');
    });
    await expect(failing).rejects.toThrow('a fails');
    await expect(insert).resolves.toBeDefined();
    expect(await stored()).toEqual([]);
  });
});

describe('the gate', () => {
  test('keeps overlapping writes apart: none is lost', async () => {
    const letters = ['a', 'b', 'c', 'd', 'e'];
    await Promise.all(letters.map((id) => slowWrite(write, id)));
    expect(await stored()).toEqual(letters.flatMap((id) => [`${id}1`, `${id}2`]));
  });

  test('runs them one at a time, in the order in which they were asked for', async () => {
    const steps: string[] = [];
    await Promise.all(
      ['a', 'b', 'c'].map((id) =>
        write(async () => {
          steps.push(`${id} begins`);
          await pause();
          steps.push(`${id} ends`);
        }),
      ),
    );
    expect(steps).toEqual(['a begins', 'a ends', 'b begins', 'b ends', 'c begins', 'c ends']);
  });

  test('rolls back the write that fails, alone, and hands its error on', async () => {
    const outcome = await Promise.allSettled([
      slowWrite(write, 'a'),
      slowWrite(write, 'b', true),
      slowWrite(write, 'c'),
    ]);
    expect(outcome[1]).toMatchObject({ status: 'rejected', reason: new Error('b fails') });
    expect(await stored()).toEqual(['a1', 'a2', 'c1', 'c2']);
    await slowWrite(write, 'd');
    expect(await stored()).toEqual(['a1', 'a2', 'c1', 'c2', 'd1', 'd2']);
  });

  test('lets a nested call join: both are stored or neither', async () => {
    await write(async (manager) => {
      await manager.insert(HealthGroup, row('outer'));
      await slowWrite(write, 'inner');
    });
    expect(await stored()).toEqual(['inner1', 'inner2', 'outer']);
    const failing = write(async (manager) => {
      await manager.insert(HealthGroup, row('outer again'));
      await slowWrite(write, 'x');
      throw new Error('after the nested call');
    });
    await expect(failing).rejects.toThrow('after the nested call');
    expect(await stored()).toEqual(['inner1', 'inner2', 'outer']);
  });

  test('waits for a joined call that nobody awaits: it is part of the transaction, not an afterthought', async () => {
    let joined: Promise<void> = Promise.resolve();
    const outer = write(async (manager) => {
      joined = slowWrite(write, 'joined');
      await manager.insert(HealthGroup, row('outer'));
    });
    await outer;
    expect(await stored()).toEqual(['joined1', 'joined2', 'outer']);
    await joined;
    // The same, but the outer fails: what joined goes with it.
    const failing = write(async () => {
      joined = slowWrite(write, 'lost');
      await pause();
      throw new Error('outer fails');
    });
    await expect(failing).rejects.toThrow('outer fails');
    await joined;
    expect(await stored()).toEqual(['joined1', 'joined2', 'outer']);
  });

  test('gives the result of the work', async () => {
    expect(await write(() => Promise.resolve(7))).toBe(7);
    expect(await write(() => write(() => Promise.resolve('joined')))).toBe('joined');
  });
});

/** The gate as it would be without its `open` mark: "inside" is whatever carries the store, however late. */
function makeLeakyGate(from: DataSource): Write {
  const inside = new AsyncLocalStorage<Parameters<Parameters<Write>[0]>[0]>();
  let tail: Promise<unknown> = Promise.resolve();
  return (work) => {
    const outer = inside.getStore();
    if (outer) return work(outer);
    const turn = tail.then(() => from.transaction((manager) => inside.run(manager, () => work(manager))));
    tail = turn.catch(() => undefined);
    return turn;
  };
}

/**
 * Work is started inside a write and not awaited; it writes once that has ended, while somebody else's write, which
 * will fail, is under way.
 */
async function writeLateFromInside(gate: Write): Promise<string[]> {
  let startLate: () => void = () => undefined;
  const mayStart = new Promise<void>((resolve) => {
    startLate = resolve;
  });
  let late: Promise<unknown> = Promise.resolve();
  await gate(async (manager) => {
    await manager.insert(HealthGroup, row('first'));
    late = mayStart.then(() => gate((inner) => inner.insert(HealthGroup, row('late'))));
  });
  const failing = gate(async (manager) => {
    await manager.insert(HealthGroup, row('failing'));
    startLate();
    await pause();
    throw new Error('fails');
  });
  await expect(failing).rejects.toThrow('fails');
  await late;
  return stored();
}

describe('work started inside a write but not awaited', () => {
  test('waits for its turn at the gate once that write has ended', async () => {
    expect(await writeLateFromInside(write)).toEqual(['first', 'late']);
  });

  test('slips past a gate without the mark, and is lost with somebody else’s write', async () => {
    expect(await writeLateFromInside(makeLeakyGate(source))).toEqual(['first']);
  });
});
