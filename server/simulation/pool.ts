import type { MessagePort } from 'node:worker_threads';
import { Piscina } from 'piscina';

/** Threads for work that would stop the server from answering: parsing, fits, simulation. */
export interface SimulationPool {
  readonly threads: number;
  /**
   * Runs a worker module's default export on a thread.
   * @param worker URL of the module, made with `workerUrl` beside the caller.
   * A task whose thread dies under it is given to another thread once, unless something was handed over to the first.
   * @throws an AbortError once `signal` aborts; the thread is ended and replaced.
   */
  run<Output>(worker: URL, input: unknown, options?: RunOptions): Promise<Output>;
  close(): Promise<void>;
}

interface RunOptions {
  signal?: AbortSignal;
  transferList?: readonly Transferable[];
}

type Transferable = ArrayBuffer | MessagePort;

/**
 * URL of a worker module beside the caller: `.ts` when the server runs from source, `.js` when built.
 * @param here the caller's import.meta.url
 * @param name the file's name without ending, for instance 'fit.worker'
 */
export function workerUrl(here: string, name: string): URL {
  return new URL(`./${name}${here.endsWith('.ts') ? '.ts' : '.js'}`, here);
}

/**
 * Starts a pool of threads. They are made when first needed and kept for a minute of idleness, or for good: a thread that
 * has computed before answers several times faster than a new one, whose code is not compiled yet.
 * @param threads at most
 * @param options.nice how far the threads stand back behind the one that answers requests (Linux: added to their nice value);
 *   without it a fit or an import on every core makes each request wait for its turn
 */
export function makeSimulationPool(threads: number, { keepThreads = false, nice = 0 } = {}): SimulationPool {
  const fromSource = import.meta.url.endsWith('.ts');
  const piscina = new Piscina({
    minThreads: 0,
    maxThreads: threads,
    idleTimeout: keepThreads ? Infinity : 60_000,
    niceIncrement: nice,
    execArgv: fromSource ? ['--import', 'tsx'] : [],
  });
  // A thread that fails without a task is replaced when one is next needed; unheard, the event would end the server.
  piscina.on('error', () => undefined);
  const attempt = async (worker: URL, input: unknown, options: RunOptions): Promise<never> => {
    try {
      return (await piscina.run(input, {
        filename: worker.href,
        ...(options.signal ? { signal: options.signal } : {}),
        ...(options.transferList ? { transferList: [...options.transferList] } : {}),
      })) as never;
    } catch (error) {
      // The pool gives what waits in its queue to a new thread only when it is next asked for something.
      if (piscina.queueSize > 0 && piscina.threads.length < threads) {
        void piscina.run(null, { filename: workerUrl(import.meta.url, 'rouse.worker').href }).catch(() => undefined);
      }
      throw error;
    }
  };
  return {
    threads,
    async run(worker, input, options = {}) {
      // A port that was handed over died with its thread: then the caller (a job) begins anew.
      for (let left = options.transferList ? 0 : 1; ; left -= 1) {
        try {
          return await attempt(worker, input, options);
        } catch (error) {
          if (!threadDied(error) || options.signal?.aborted) throw error;
          if (left === 0) {
            throw new Error(`The thread that computed this ended in the middle (${error.message}).`, { cause: error });
          }
        }
      }
    },
    close: () => piscina.destroy(),
  };
}

/** True if a task failed because its thread ended under it, rather than by an error of its own. */
function threadDied(error: unknown): error is Error {
  if (!(error instanceof Error)) return false;
  return (
    error.message.startsWith('worker exited with code') ||
    ('code' in error && error.code === 'ERR_WORKER_OUT_OF_MEMORY')
  );
}
