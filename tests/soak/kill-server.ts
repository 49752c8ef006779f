import { spawn, type ChildProcess } from 'node:child_process';
import { createHmac } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import Database from 'better-sqlite3';
import { checkDatabase } from '../../server/database/check-database.ts';
import { databaseFile, openDatabase } from '../../server/database/database.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { antiForgeryToken } from '../../server/http/anti-forgery.ts';
import { makeStream } from '../../shared/stochastic/random.ts';
import { buildPerson, buildSite } from '../support/build-site.ts';
import { testConfig } from '../support/test-server.ts';
import type { Soak } from './soak.ts';

const kills = Number(process.env.KILLS ?? 200);
const seed = 4310;
const readyWithinMilliseconds = 5000;

/**
 * Kills a server at random moments of mixed work: censuses, changes of staffed beds, new groups, queued mail, backups.
 * After each: the file is whole, every write that was answered is there, and the next start is ready in time.
 */
export const killServer: Soak = {
  name: 'kill-server',
  async run(print) {
    const dataDir = mkdtempSync(join(tmpdir(), 'shoalmark-kill-'));
    const port = await freePort();
    const random = makeStream(seed);
    const sid = 'a'.repeat(32);
    const database = await openDatabase(dataDir);
    const { site, areas } = await buildSite(database);
    const roles = [{ role: 'operations' as const, siteId: site.id }, { role: 'administrator' as const }];
    const person = await buildPerson(database, roles);
    const now = Math.floor(Date.now() / 1000);
    const session = { cookie: { path: '/', httpOnly: true }, personId: person.id, signedInAt: now, usedAt: now };
    await database.write((manager) =>
      manager.insert(SessionRow, {
        ...{ sid, expiresAt: now + 86_400, personId: person.id },
        data: JSON.stringify({ ...session, usedAt: now + 86_400 }),
      }),
    );
    await database.close();
    const signature = createHmac('sha256', testConfig.sessionSecret).update(sid).digest('base64').replace(/=+$/, '');
    const headers = {
      cookie: `shoalmark=${encodeURIComponent(`s:${sid}.${signature}`)}`,
      'x-csrf-token': antiForgeryToken(testConfig.sessionSecret, sid),
      'content-type': 'application/json',
    };
    const base = `http://127.0.0.1:${String(port)}`;
    const answered = { census: [] as string[], health_group: [] as string[], bed_change: [] as string[] };
    const total = () => Object.values(answered).reduce((sum, ids) => sum + ids.length, 0);
    let slowest = 0;
    let inWork = 0;
    let n = 0;
    const post = async (path: string, body: object): Promise<Record<string, string> | null> => {
      const reply = await fetch(`${base}${path}`, { method: 'POST', headers, body: JSON.stringify(body) });
      const text = await reply.text();
      if (reply.status >= 500) throw new Error(`${path} answered ${String(reply.status)}: ${text}`);
      return reply.ok ? (JSON.parse(text) as Record<string, string>) : null;
    };
    const works: (() => Promise<void>)[] = [
      async () => {
        const takenAt = Math.floor(Date.now() / 1000);
        const figures = areas.map(({ id }) => ({ areaId: id, present: n % 9, waiting: 0, boarding: 0 }));
        const made = await post(`/api/sites/${site.id}/censuses`, {
          ...{ takenAt, areas: figures, undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null },
        });
        if (made?.censusId) answered.census.push(made.censusId);
      },
      async () => {
        const body = { areaId: areas[0].id, beds: 10, blocked: 0, until: 'end of this shift', reason: 'Soak test' };
        const made = await post(`/api/sites/${site.id}/staffed-bed-changes`, body);
        if (made?.changeId) answered.bed_change.push(made.changeId);
      },
      async () => {
        const made = await post('/api/installation/groups', { name: `Group ${String((n += 1))}` });
        if (made) answered.health_group.push(made.id);
      },
      async () => {
        await post('/api/people', { email: `p${String((n += 1))}@people.test`, name: 'Soak Person' });
      },
      async () => {
        await post('/api/server-status/backups', {});
      },
    ];
    try {
      for (let kill = 0; kill < kills; kill += 1) {
        const startedAt = performance.now();
        const child = spawn(
          process.execPath,
          [
            '--import',
            'tsx',
            fileURLToPath(new URL('../support/serve-child.ts', import.meta.url)),
            dataDir,
            String(port),
          ],
          { stdio: ['ignore', 'ignore', 'inherit'] },
        );
        await untilReady(base, child);
        const took = performance.now() - startedAt;
        slowest = Math.max(slowest, took);
        const dead = { is: false };
        const loops = works.map(async (work) => {
          while (!dead.is) {
            try {
              await work();
            } catch (error) {
              // A line that breaks off is what a kill does; an answer that says 500 is not.
              if (error instanceof Error && error.message.includes('answered 5')) throw error;
            }
          }
        });
        // In the midst of work: some of it was answered in this life, more is under way.
        const before = total();
        for (let waited = 0; total() === before && waited < 30_000; waited += 20) await pause(20);
        await pause(random.uniform() * 1500);
        const ended = new Promise((resolve) => child.once('exit', resolve));
        child.kill('SIGKILL');
        await ended;
        dead.is = true;
        await Promise.all(loops);
        const { chain } = await checkDatabase(databaseFile(dataDir));
        inWork = Math.max(inWork, chain.rows);
        const db = new Database(databaseFile(dataDir), { readonly: true });
        for (const [table, ids] of Object.entries(answered)) {
          const found = db
            .prepare<[string], { n: number }>(
              `SELECT count(*) AS n FROM "${table}" WHERE id IN (SELECT value FROM json_each(?))`,
            )
            .get(JSON.stringify(ids))?.n;
          if (found !== ids.length) {
            throw new Error(
              `after kill ${String(kill + 1)} only ${String(found)} of ${String(ids.length)} rows of ${table}`,
            );
          }
        }
        db.close();
        if ((kill + 1) % 10 === 0) print(`${String(kill + 1)} kills, slowest start ${slowest.toFixed(0)} ms`);
      }
      const counts = Object.entries(answered).map(([table, ids]) => `${String(ids.length)} ${table}`);
      print(`${String(kills)} kills; answered and all there: ${counts.join(', ')}; audit rows ${String(inWork)}`);
      print(`slowest start to ready ${slowest.toFixed(0)} ms`);
      if (answered.health_group.length < kills) throw new Error('too little was written to prove anything');
      if (slowest > readyWithinMilliseconds) throw new Error('a start took too long');
    } finally {
      rmSync(dataDir, { recursive: true, force: true });
    }
  },
};

const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));

async function untilReady(base: string, child: ChildProcess): Promise<void> {
  for (;;) {
    if (child.exitCode !== null) throw new Error(`the server ended with code ${String(child.exitCode)}`);
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
