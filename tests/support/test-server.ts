import { createHmac, randomBytes } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import supertest from 'supertest';
import { createApp, type App } from '../../server/app.ts';
import type { Config } from '../../server/config.ts';
import { openDatabase } from '../../server/database/database.ts';
import type { Dependencies } from '../../server/dependencies.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { OutlookIssuer } from '../../server/features/outlook/issuer.ts';
import { antiForgeryToken } from '../../server/http/anti-forgery.ts';
import { SessionStore } from '../../server/http/session-store.ts';
import { JobQueue } from '../../server/jobs/queue.ts';
import { makeJobKinds } from '../../server/jobs/registry.ts';
import { makeLogger } from '../../server/log.ts';
import { makeMailer } from '../../server/mail/mailer.ts';
import { makeSimulationPool } from '../../server/simulation/pool.ts';

export const testConfig: Config = {
  production: false,
  host: '127.0.0.1',
  port: 4310,
  dataDir: '',
  baseUrl: 'http://127.0.0.1:4310',
  trustProxy: false,
  oidc: { issuerUrl: 'http://127.0.0.1:9', clientId: 'shoalmark', clientSecret: 'test-client-secret' },
  sessionSecret: 'test-session-secret-0123456789abcdef',
  smtpUrl: null,
  mailFrom: 'Shoalmark <shoalmark@localhost>',
  logLevel: 'silent',
  administratorContact: 'the test administrator',
  threads: 1,
  idleMinutes: 15,
  sessionHours: 12,
  // A test asks faster than any person.
  requestsPerMinute: 1_000_000,
  deliveryReportToken: null,
  metricsToken: null,
  backupDir: null,
  backupEveryHours: 0,
  backupKeep: 3,
  clockOffset: 0,
};

/** An application on a database file of its own, with a clock that the test moves. */
export interface TestServer {
  app: App;
  deps: Dependencies;
  issuer: OutlookIssuer;
  sessions: SessionStore;
  /** UTC seconds; set it to move time. */
  time: { now: number };
  /** Works the job queue with the real handlers until nothing waits. */
  workJobs(): Promise<void>;
  /** Starts the job queue again after a test stopped it. */
  restartJobs(): Promise<void>;
  /** A client that carries a signed-in person's cookie and anti-forgery token. */
  signedInAs(personId: string): Promise<SignedIn>;
  nobody(): ReturnType<typeof supertest>;
  /** @param options.keepData leaves the data folder to whoever named it */
  close(options?: { keepData?: boolean }): Promise<void>;
}

export interface SignedIn {
  cookie: string;
  csrfToken: string;
  get(path: string): supertest.Test;
  send(method: 'post' | 'put' | 'patch' | 'delete', path: string, body?: object): supertest.Test;
}

/** Opens an application for a test. Sessions use the real clock; everything else the test's. Outlooks are of few replications. */
export async function openTestServer({
  now = 1_790_000_000,
  config = {},
  replications = 400,
  log,
}: {
  now?: number;
  config?: Partial<Config>;
  replications?: number;
  /** Is given each line of the log. */
  log?: (line: string) => void;
} = {}): Promise<TestServer> {
  const dataDir = config.dataDir ?? mkdtempSync(join(tmpdir(), 'shoalmark-test-'));
  const time = { now };
  const full: Config = { ...testConfig, dataDir, ...config };
  const database = await openDatabase(dataDir);
  const logger = makeLogger(full.logLevel, log && { write: log });
  const clock = () => time.now;
  const pool = makeSimulationPool(1);
  const simulation = makeSimulationPool(full.threads);
  const jobs = new JobQueue(database, clock, logger);
  const deps: Dependencies = {
    config: full,
    database,
    clock,
    logger,
    pool,
    simulation,
    jobs,
    mailer: makeMailer(full),
  };
  const issuer = new OutlookIssuer(deps, replications);
  const realClock = () => Math.floor(Date.now() / 1000);
  const sessions = new SessionStore(database, realClock);
  const app = createApp(deps, issuer, sessions, null);
  let working = false;

  return {
    app,
    deps,
    issuer,
    sessions,
    time,
    async workJobs() {
      if (!working) await jobs.start(makeJobKinds(deps, issuer));
      working = true;
      await jobs.idle();
    },
    async restartJobs() {
      await jobs.start(makeJobKinds(deps, issuer));
      working = true;
    },
    async signedInAs(personId) {
      const sid = randomBytes(16).toString('hex');
      const session = {
        cookie: { originalMaxAge: null, httpOnly: true, path: '/', sameSite: 'lax' },
        personId,
        signedInAt: realClock(),
        idToken: '',
      };
      await database.write((manager) =>
        manager.insert(SessionRow, { sid, personId, expiresAt: realClock() + 3600, data: JSON.stringify(session) }),
      );
      const signature = createHmac('sha256', full.sessionSecret).update(sid).digest('base64').replace(/=+$/, '');
      const cookie = `shoalmark=${encodeURIComponent(`s:${sid}.${signature}`)}`;
      const csrfToken = antiForgeryToken(full.sessionSecret, sid);
      const client = supertest(app.express);
      return {
        cookie,
        csrfToken,
        get: (path) => client.get(path).set('cookie', cookie),
        send: (method, path, body) => {
          const request = client[method](path).set('cookie', cookie).set('x-csrf-token', csrfToken);
          return body === undefined ? request : request.send(body);
        },
      };
    },
    nobody: () => supertest(app.express),
    async close({ keepData = false } = {}) {
      if (working) await jobs.stop();
      await issuer.settle();
      await pool.close();
      await simulation.close();
      await database.close();
      if (!keepData) rmSync(dataDir, { recursive: true, force: true });
    },
  };
}
