import type { MessagePort } from 'node:worker_threads';
import { Piscina } from 'piscina';

/** Threads for work that would stop the server from answering: parsing, fits, simulation. */
export interface SimulationPool {
  readonly threads: number;
  /**
   * Runs a worker module's default export on a thread.
   * @param worker URL of the module, made with `workerUrl` beside the caller.
   * @throws an AbortError once `signal` aborts; the thread is ended and replaced.
   */
  run<Output>(
    worker: URL,
    input: unknown,
    options?: { signal?: AbortSignal; transferList?: readonly Transferable[] },
  ): Promise<Output>;
  close(): Promise<void>;
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
  return {
    threads,
    run: (worker, input, options = {}) =>
      piscina.run(input, {
        filename: worker.href,
        ...(options.signal ? { signal: options.signal } : {}),
        ...(options.transferList ? { transferList: [...options.transferList] } : {}),
      }) as Promise<never>,
    close: () => piscina.destroy(),
  };
}
