import { AsyncLocalStorage } from 'node:async_hooks';
import type { DataSource, EntityManager } from 'typeorm';

/** Runs work in a transaction, alone: no other write runs meanwhile. */
export type Write = <T>(work: (manager: EntityManager) => Promise<T>) => Promise<T>;

/**
 * The one way to write. TypeORM has one query runner for SQLite, so two transactions that overlap
 * nest into each other, and a write that succeeded can be rolled back with one that fails. Here they
 * go one at a time.
 *
 * A call made inside another's work joins its transaction. The mark that says "inside" is shut when
 * the outer work ends: work that was started inside but not awaited would otherwise carry the mark
 * along and later slip past the gate.
 *
 * Never wait for the network, mail or a worker inside: everybody else's write waits too.
 */
export function makeWriteGate(source: DataSource): Write {
  const inside = new AsyncLocalStorage<{ open: boolean; manager: EntityManager }>();
  let tail: Promise<unknown> = Promise.resolve();
  return function write<T>(work: (manager: EntityManager) => Promise<T>): Promise<T> {
    const outer = inside.getStore();
    if (outer?.open) return work(outer.manager);
    const turn = tail.then(() =>
      source.transaction(async (manager) => {
        const mark = { open: true, manager };
        try {
          return await inside.run(mark, () => work(manager));
        } finally {
          mark.open = false;
        }
      }),
    );
    tail = turn.catch(() => undefined);
    return turn;
  };
}
