import { spawn, type ChildProcess } from 'node:child_process';
import { createHmac } from 'node:crypto';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import Database from 'better-sqlite3';
import { checkDatabase } from '../../server/database/check-database.ts';
import { databaseFile } from '../../server/database/database.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { type VisitLog } from '../../server/entities/VisitLog.ts';
import { antiForgeryToken } from '../../server/http/anti-forgery.ts';
import { makeStream } from '../../shared/stochastic/random.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { findLost, makeMixedWork, type WorkReply } from '../support/mixed-work.ts';
import { startMailServer } from '../support/start-mail-server.ts';
import { openTestServer, testConfig } from '../support/test-server.ts';
import type { Soak } from './soak.ts';

const kills = Number(process.env.KILLS ?? 200);
const seed = 4310;
const readyWithinMilliseconds = 5000;
/** A server works at least for a moment and at most for this long before it is killed. */
const mostWorkMilliseconds = 4000;
const sid = 'a'.repeat(32);

/** A data folder with a site that has visits, a model in use and a plan, and somebody with every role signed in. */
async function prepare(dataDir: string): Promise<BuiltSite> {
  const server = await openTestServer({ now: Math.floor(Date.now() / 1000), config: { dataDir } });
  try {
    const { database } = server.deps;
    const built = await buildSite(database);
    const siteId = built.site.id;
    await giveModel(database, await fitModel(server, built, 9), built);
    const held = (['charge', 'operations', 'steward'] as const).map((role) => ({ role, siteId }));
    const person = await buildPerson(database, [...held, { role: 'administrator' }]);
    const client = await server.signedInAs(person.id);
    await client.send('put', `/api/sites/${siteId}/staffed-beds`, flatPlan(built.areas, [14, 3]));
    const now = Math.floor(Date.now() / 1000);
    const session = { cookie: { path: '/', httpOnly: true }, personId: person.id, signedInAt: now, usedAt: now };
    await database.write((manager) =>
      manager.insert(SessionRow, { sid, expiresAt: now + 43_200, personId: person.id, data: JSON.stringify(session) }),
    );
    return built;
  } finally {
    await server.close({ keepData: true });
  }
}

/**
 * Kills the built server at random moments of mixed work: censuses with their outlooks, changes of staffed beds, new groups,
 * mail, backups, imports, fits. After each: the file is whole, every write that was answered is there, no log counts by
 * halves, and the next start is ready in time. `KILLS` sets how often.
 */
export const killServer: Soak = {
  name: 'kill-server',
  async run(print) {
    if (!existsSync(new URL('../../dist/server/start.js', import.meta.url))) throw new Error('npm run build first');
    const dataDir = mkdtempSync(join(tmpdir(), 'shoalmark-kill-'));
    const mail = await startMailServer();
    const port = await freePort();
    const random = makeStream(seed);
    const built = await prepare(dataDir);
    const base = `http://127.0.0.1:${String(port)}`;
    const config = { ...testConfig, dataDir, port, baseUrl: base, smtpUrl: mail.smtpUrl };
    const signature = createHmac('sha256', testConfig.sessionSecret).update(sid).digest('base64').replace(/=+$/, '');
    const headers = {
      cookie: `shoalmark=${encodeURIComponent(`s:${sid}.${signature}`)}`,
      'x-csrf-token': antiForgeryToken(testConfig.sessionSecret, sid),
    };
    const request = async (path: string, body: object | string) => {
      const isCsv = typeof body === 'string';
      const reply = await fetch(`${base}${path}`, {
        method: 'POST',
        headers: { ...headers, 'content-type': isCsv ? 'text/csv' : 'application/json' },
        body: isCsv ? body : JSON.stringify(body),
      });
      const text = await reply.text();
      if (reply.status >= 500 || reply.status === 401) {
        throw new Error(`${path} answered ${String(reply.status)}: ${text}`);
      }
      return reply.ok ? (JSON.parse(text) as WorkReply) : null;
    };
    const { answered, works } = makeMixedWork(built, request, () => Math.floor(Date.now() / 1000));
    const total = () => Object.values(answered).reduce((sum, ids) => sum + ids.length, 0);
    const starts: number[] = [];
    const start = async (): Promise<ChildProcess> => {
      const startedAt = performance.now();
      const program = fileURLToPath(new URL('../support/serve-built.js', import.meta.url));
      const child = spawn(process.execPath, [program, JSON.stringify(config)], {
        stdio: ['pipe', 'ignore', 'inherit'],
      });
      await untilReady(base, child);
      starts.push(performance.now() - startedAt);
      return child;
    };
    const kill = async (child: ChildProcess) => {
      if (child.exitCode !== null || child.signalCode !== null) throw new Error('the server ended by itself');
      const ended = new Promise((resolve) => child.once('exit', resolve));
      child.kill('SIGKILL');
      await ended;
    };
    let rows = 0;
    try {
      for (let done = 0; done < kills; done += 1) {
        const child = await start();
        const dead = { is: false };
        const loops = works.map(async (work) => {
          while (!dead.is) {
            try {
              await work();
            } catch (error) {
              // A line that breaks off is what a kill does; an answer that says 500 is not.
              if (error instanceof Error && /answered [45]|answer names no/.test(error.message)) throw error;
              await pause(5);
            }
          }
        });
        // In the midst of work: some of it was answered in this life, more is under way.
        const before = total();
        for (let waited = 0; total() === before && waited < 30_000; waited += 20) await pause(20);
        await pause(random.uniform() * mostWorkMilliseconds);
        await kill(child);
        dead.is = true;
        await Promise.all(loops);
        rows = (await checkDatabase(databaseFile(dataDir))).chain.rows;
        const db = new Database(databaseFile(dataDir), { readonly: true });
        const lost = findLost(db, answered);
        db.close();
        if (lost.length > 0) throw new Error(`after kill ${String(done + 1)}: ${lost.join('; ')}`);
        if ((done + 1) % 10 === 0) print(`${String(done + 1)} kills; ${startsInWords(starts)}`);
      }
      // Left alone, the last start brings every log that was accepted to its end.
      const child = await start();
      await untilLoaded(dataDir);
      await kill(child);
      const counts = Object.entries(answered).map(([table, ids]) => `${String(ids.length)} ${table}`);
      print(`${String(kills)} kills; answered and all there: ${counts.join(', ')}; audit rows ${String(rows)}`);
      print(`${String(mail.taken.length)} mails taken; ${startsInWords(starts)}`);
      const idle = Object.entries(answered).filter(([, ids]) => ids.length === 0);
      if (answered.health_group.length < kills || idle.length > 0) {
        throw new Error(
          `too little was written to prove anything (none of ${idle.map(([table]) => table).join(', ')})`,
        );
      }
      if (Math.max(...starts) > readyWithinMilliseconds) throw new Error('a start took too long');
    } finally {
      await mail.close();
      rmSync(dataDir, { recursive: true, force: true });
    }
  },
};

function startsInWords(starts: readonly number[]): string {
  const sorted = starts.toSorted((a, b) => a - b);
  const at = (share: number) => (sorted[Math.floor(share * (sorted.length - 1))] / 1000).toFixed(2);
  return `start to ready ${at(0.5)} s in the middle, ${at(1)} s at most`;
}

/** Waits until no log is being loaded any more. */
async function untilLoaded(dataDir: string): Promise<void> {
  const db = new Database(databaseFile(dataDir), { readonly: true });
  try {
    const loading: VisitLog['status'] = 'loading';
    const count = db.prepare<[string], { n: number }>('SELECT count(*) AS n FROM visit_log WHERE status = ?');
    for (let waited = 0; count.get(loading)?.n !== 0; waited += 200) {
      if (waited > 600_000) throw new Error('logs that were accepted are still being loaded after ten minutes');
      await pause(200);
    }
  } finally {
    db.close();
  }
}

const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function untilReady(base: string, child: ChildProcess): Promise<void> {
  for (;;) {
    if (child.exitCode !== null || child.signalCode !== null) {
      throw new Error(`the server ended by itself (${String(child.exitCode ?? child.signalCode)})`);
    }
    const ready = await fetch(`${base}/readyz`).then(
      ({ ok }) => ok,
      () => false,
    );
    if (ready) return;
    await pause(25);
  }
}

async function freePort(): Promise<number> {
  const probe = createServer().listen(0, '127.0.0.1');
  await new Promise((resolve) => probe.once('listening', resolve));
  const { port } = probe.address() as AddressInfo;
  await new Promise((resolve) => probe.close(resolve));
  return port;
}
