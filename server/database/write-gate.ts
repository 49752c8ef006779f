import { AsyncLocalStorage } from 'node:async_hooks';
import type { DataSource, EntityManager } from 'typeorm';

/** Runs work in a transaction, alone: no other write runs meanwhile. */
export type Write = <T>(work: (manager: EntityManager) => Promise<T>) => Promise<T>;

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
 * Never wait for the network, mail or a worker inside: everybody else's write waits too.
 */
export function makeWriteGate(source: DataSource): Write {
  const inside = new AsyncLocalStorage<Mark>();
  let tail: Promise<unknown> = Promise.resolve();
  return function write<T>(work: (manager: EntityManager) => Promise<T>): Promise<T> {
    const outer = inside.getStore();
    if (outer?.open) {
      const joined = work(outer.manager);
      outer.joined.push(joined);
      // A promise of its own, so that a failure that nobody awaits is still reported.
      return joined.then((result) => result);
    }
    const turn = tail.then(() =>
      source.transaction(async (manager) => {
        const mark: Mark = { open: true, manager, joined: [] };
        try {
          return await inside.run(mark, () => work(manager));
        } finally {
          // A joined call may itself be joined while it is waited for.
          while (mark.joined.length > 0) await Promise.allSettled(mark.joined.splice(0));
          mark.open = false;
        }
      }),
    );
    tail = turn.catch(() => undefined);
    return turn;
  };
}
