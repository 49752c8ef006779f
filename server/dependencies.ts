import type { Clock } from './clock.ts';
import type { Config } from './config.ts';
import type { Database } from './database/database.ts';
import type { JobQueue } from './jobs/queue.ts';
import type { Logger } from './log.ts';
import type { Mailer } from './mail/mailer.ts';
import type { SimulationPool } from './simulation/pool.ts';

/** What the application is made of; tests hand in their own. */
export interface Dependencies {
  config: Config;
  database: Database;
  clock: Clock;
  logger: Logger;
  /** Threads for fits, parsing and checks. */
  pool: SimulationPool;
  /** Threads kept for outlooks, so that a fit never makes a nurse wait. */
  simulation: SimulationPool;
  jobs: JobQueue;
  mailer: Mailer;
}
