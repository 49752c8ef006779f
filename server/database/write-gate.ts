import { AsyncLocalStorage } from 'node:async_hooks';
import { setImmediate as nextTurn, setTimeout as pause } from 'node:timers/promises';
import type { DataSource, EntityManager } from 'typeorm';
import { lockWaitMilliseconds, rawConnection } from './data-source.ts';
import { databaseFaultOf } from './database-fault.ts';

/** Runs work in a transaction, alone: no other write runs meanwhile. */
export type Write = <T>(work: (manager: EntityManager) => Promise<T>, options?: WriteOptions) => Promise<T>;

interface WriteOptions {
  /** Nobody can see it yet, as with the rows of a log that is still being loaded: it is not counted. */
  unseen?: boolean;
}

/** The gate, and how often something was stored through it so far that somebody may see. */
export interface WriteGate {
  write: Write;
  writes: () => number;
}

interface Mark {
  open: boolean;
  manager: EntityManager;
  /** Calls that joined and may not have ended. */
  joined: Promise<unknown>[];
}

/**
 * The one way to write. TypeORM has one query runner for SQLite, so two transactions that overlap
 * nest into each other, and a write that succeeded can be rolled back with one that fails. Here they
 * go one at a time.
 *
 * A call made inside another's work joins its transaction, which waits for it even if the work does
 * not: the rest of it would otherwise run outside any transaction. The mark that says "inside" is shut
 * when the outer work ends: work that was started inside but not awaited would otherwise carry the mark
 * along and later slip past the gate.
 *
 * One write a turn of the event loop: requests are answered between two.
 *
 * Never wait for the network, mail or a worker inside: everybody else's write waits too.
 *
 * Another process's lock is waited for here, five seconds from when the write was asked for: SQLite's own waiting
 * would stop every request meanwhile, and each write in the queue would begin its wait anew.
 */
export function makeWriteGate(source: DataSource): WriteGate {
  const inside = new AsyncLocalStorage<Mark>();
  let tail: Promise<unknown> = Promise.resolve();
  let writes = 0;
  // SQLite answers at once, so that promises alone would make all the writes that wait before any request is answered.
  let wroteInThisTurn = false;
  const write: Write = (work, { unseen = false } = {}) => {
    const outer = inside.getStore();
    if (outer?.open) {
      const joined = work(outer.manager);
      outer.joined.push(joined);
      // A promise of its own, so that a failure that nobody awaits is still reported.
      return joined.then((result) => result);
    }
    const giveUpAt = performance.now() + lockWaitMilliseconds;
    const turn = tail.then(async () => {
      if (wroteInThisTurn) await nextTurn();
      await untilUnlocked(source, giveUpAt);
      wroteInThisTurn = true;
      setImmediate(() => {
        wroteInThisTurn = false;
      });
      const stored = await source.transaction(async (manager) => {
        const mark: Mark = { open: true, manager, joined: [] };
        try {
          return await inside.run(mark, () => work(manager));
        } finally {
          // A joined call may itself be joined while it is waited for.
          while (mark.joined.length > 0) await Promise.allSettled(mark.joined.splice(0));
          mark.open = false;
        }
      });
      if (!unseen) writes += 1;
      return stored;
    });
    tail = turn.catch(() => leaveTransaction(source));
    return turn;
  };
  return { write, writes: () => writes };
}

/** Waits until no other process holds the write lock, without stopping the thread; past the time it throws SQLite's error. */
async function untilUnlocked(source: DataSource, giveUpAt: number): Promise<void> {
  const connection = rawConnection(source);
  for (;;) {
    try {
      connection.pragma('busy_timeout = 0');
      connection.exec('BEGIN IMMEDIATE');
      connection.exec('ROLLBACK');
      return;
    } catch (error) {
      // Any other fault is the transaction's to tell.
      if (databaseFaultOf(error)?.kind !== 'locked') return;
      if (performance.now() >= giveUpAt) throw error;
    } finally {
      connection.pragma(`busy_timeout = ${String(lockWaitMilliseconds)}`);
    }
    await pause(20);
  }
}

/**
 * SQLite may end a transaction by itself (no room, a failing disk); TypeORM's own rollback then fails, and it would take
 * every later transaction for one within the lost one.
 */
async function leaveTransaction(source: DataSource): Promise<void> {
  if (!source.isInitialized) return;
  const runner = source.createQueryRunner();
  if (!runner.isTransactionActive) return;
  if (!rawConnection(source).inTransaction) rawConnection(source).exec('BEGIN');
  await runner.rollbackTransaction().catch(() => undefined);
}
