import { mkdirSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import { fileURLToPath } from 'node:url';
import { createApp } from './app.ts';
import { systemClock } from './clock.ts';
import { readConfig, type Config } from './config.ts';
import { databaseFaultOf, type DatabaseFaultKind } from './database/database-fault.ts';
import { openDatabase } from './database/database.ts';
import type { Dependencies } from './dependencies.ts';
import { ConfigError } from './errors.ts';
import { afterOutlook } from './features/alerts/after-outlook.ts';
import { OutlookIssuer } from './features/outlook/issuer.ts';
import { SessionStore } from './http/session-store.ts';
import { JobQueue } from './jobs/queue.ts';
import { makeJobKinds } from './jobs/registry.ts';
import { startTimetable } from './jobs/timetable.ts';
import { sweepVisitLogs } from './features/visit-logs/sweep-visit-logs.ts';
import { makeLogger } from './log.ts';
import { makeMailer } from './mail/mailer.ts';
import { makeSimulationPool } from './simulation/pool.ts';

export interface RunningServer {
  url: string;
  deps: Dependencies;
  issuer: OutlookIssuer;
  /** Stops gracefully: no new requests, running work ended or queued again, database closed. */
  stop(): Promise<void>;
}

/** Folder of the built client, from source and from the build alike. */
function clientDir(): string {
  const root = import.meta.url.endsWith('.ts') ? '../dist/client' : '../client';
  return fileURLToPath(new URL(root, import.meta.url));
}

/** Opens everything without listening: the database, threads, jobs and the issuer. */
export async function openServer(
  config: Config,
): Promise<{ deps: Dependencies; issuer: OutlookIssuer; close: () => Promise<void> }> {
  const mailer = makeMailer(config);
  try {
    mkdirSync(config.dataDir, { recursive: true, mode: 0o700 });
  } catch (error) {
    throw new ConfigError(
      `Cannot start: DATA_DIR cannot be made or written (${error instanceof Error ? error.message : String(error)}).`,
    );
  }
  const logger = makeLogger(config.logLevel);
  const clock = systemClock(config.clockOffset);
  const database = await openDatabase(config.dataDir).catch((error: unknown) => {
    const fault = databaseFaultOf(error);
    throw fault === null
      ? error
      : new ConfigError(
          `Cannot start: the database in DATA_DIR cannot be used (${fault.message}). ${remedies[fault.kind]}`,
        );
  });
  const pool = makeSimulationPool(config.threads, { nice: 10 });
  const simulation = makeSimulationPool(config.threads, { keepThreads: true, nice: 1 });
  const jobs = new JobQueue(database, clock, logger);
  const deps: Dependencies = { config, database, clock, logger, pool, simulation, jobs, mailer };
  const issuer = new OutlookIssuer(deps);
  issuer.onIssued = (outlookId) => afterOutlook(deps, outlookId);
  return {
    deps,
    issuer,
    async close() {
      await jobs.stop();
      await issuer.settle();
      await pool.close();
      await simulation.close();
      await database.close();
    },
  };
}

/** What an operator does about it. */
const remedies: Record<DatabaseFaultKind, string> = {
  'no room': 'Make room on its disk and start again.',
  locked: 'Another program holds it: end that program, or wait until it is done, and start again.',
  'not writable': 'Let the user that runs the server write to the folder and its files, and start again.',
  damaged: 'Restore a backup (npm run restore) and start again.',
};

/** Starts the server: migrates, sweeps what a crash left, listens, works jobs and the timetable. */
export async function startServer(config: Config): Promise<RunningServer> {
  const { deps, issuer, close } = await openServer(config);
  const sessions = new SessionStore(deps.database, deps.clock, config.sessionHours * 3600);
  const app = createApp(deps, issuer, sessions, clientDir());
  const server = createServer(app.express);
  // Longer than a page's polls and a proxy's minute: a connection that is closed just as it is used again fails its request.
  server.keepAliveTimeout = 65_000;
  server.headersTimeout = 70_000;
  try {
    await sweepVisitLogs(deps);
    await listen(server, config);
  } catch (error) {
    await close();
    throw error;
  }
  await deps.jobs.start(makeJobKinds(deps, issuer));
  const timetable = startTimetable(deps, issuer, sessions);
  deps.logger.info({ url: config.baseUrl }, 'listening');
  return {
    url: config.baseUrl,
    deps,
    issuer,
    async stop() {
      await timetable.stop();
      const closed = new Promise<void>((resolve) => {
        server.close(() => {
          resolve();
        });
      });
      server.closeIdleConnections();
      const force = setTimeout(() => {
        server.closeAllConnections();
      }, 5000);
      await closed;
      clearTimeout(force);
      await close();
    },
  };
}

/**
 * A server in production, from the environment until it is told to end: no stand-ins, secure cookies, every secret from
 * the environment. What keeps it from starting is one line on standard error and exit code 1.
 */
export async function runServer(env: Record<string, string | undefined>): Promise<void> {
  try {
    const server = await startServer(readConfig(env, { production: true }));
    let stopping = false;
    for (const signal of ['SIGINT', 'SIGTERM'] as const) {
      process.on(signal, () => {
        if (stopping) return;
        stopping = true;
        void server.stop().then(() => process.exit(0));
      });
    }
  } catch (error) {
    if (!(error instanceof ConfigError)) throw error;
    process.stderr.write(`${error.message}\n`);
    process.exitCode = 1;
  }
}

function listen(server: Server, config: Config): Promise<void> {
  return new Promise((resolve, reject) => {
    server.once('error', (error: NodeJS.ErrnoException) => {
      reject(
        new ConfigError(
          error.code === 'EADDRINUSE'
            ? `Cannot start: PORT ${String(config.port)} is in use.`
            : `Cannot start: HOST ${config.host} and PORT ${String(config.port)} cannot be listened on (${error.message}).`,
        ),
      );
    });
    server.listen(config.port, config.host, resolve);
  });
}
