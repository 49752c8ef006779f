import { execFileSync } from 'node:child_process';
import { createHmac, randomBytes } from 'node:crypto';
import { cpSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { Worker } from 'node:worker_threads';
import Database from 'better-sqlite3';
import type { ServerStatus } from '../../shared/api/server-status.ts';
import type { DemoCaller } from '../../demo/demo-caller.ts';
import { demoAccounts } from '../../demo/farrowmere-accounts.ts';
import { demoSeed, demoSites } from '../../demo/farrowmere.ts';
import { finishJob } from '../../demo/live-history.ts';
import { makeVisitLog } from '../../demo/make-visit-log.ts';
import { writeVisitCsv } from '../../demo/write-visit-csv.ts';
import { backupDirIn, demoSecrets } from '../../server/config.ts';
import { listBackups } from '../../server/database/backup-files.ts';
import { databaseFile } from '../../server/database/database.ts';
import { restoreBackup } from '../../server/database/restore-backup.ts';
import { antiForgeryToken } from '../../server/http/anti-forgery.ts';
import { cancelRecomputing, untilIdle } from '../bench/demo-server.ts';
import { startBuiltDemo, type RunningDemo } from '../support/journey.ts';
import { multiplyVisits } from '../support/more-visits.ts';
import type { Soak } from './soak.ts';

const site = demoSites[0];
const sitePath = `/api/sites/${site.id}`;
const people = 200;
const seconds = Number(process.env.LOAD_SECONDS ?? 60);
/** The page asks every 30 s; here three times as often. */
const everySeconds = 10;
const censusEverySeconds = 10;
const rowsOfImport = 200_000;
const manyVisits = 3_000_000;
const mostMilliseconds = 100;
const mostRatio = 1.5;

interface Times {
  [read: string]: number[];
}

/**
 * Two hundred people look at Tonight while a census is saved every ten seconds, logs are imported one after the other and a
 * backup is made; then the same with three million visits. `DEMO_DATA` names the data folder of a demo to copy, `LOAD_SECONDS` how long.
 */
export const load: Soak = {
  name: 'load',
  async run(print) {
    const dataDir = mkdtempSync(join(tmpdir(), 'shoalmark-load-'));
    const { DEMO_DATA } = process.env;
    if (DEMO_DATA !== undefined) cpSync(DEMO_DATA, dataDir, { recursive: true });
    try {
      const usual = await measure(dataDir, print);
      const visits = multiplyVisits(dataDir, manyVisits);
      print(`${visits.toLocaleString('en')} visits`);
      const many = await measure(dataDir, print);
      const faults: string[] = [];
      for (const [read, times] of Object.entries(usual)) {
        const ratio = quantile(many[read] ?? [], 0.99) / quantile(times, 0.99);
        print(`${read}: ${ratio.toFixed(2)} times as long at the 99th percentile with ten times the data`);
        if (quantile(times, 0.99) > mostMilliseconds) faults.push(`${read} took too long`);
        if (!(ratio <= mostRatio)) faults.push(`${read} slows down with the data`);
      }
      if (faults.length > 0) throw new Error(faults.join('; '));
    } finally {
      rmSync(dataDir, { recursive: true, force: true });
    }
  },
};

/** One run of the load on a data folder; throws at any error, and where the backup made under it is not whole. */
async function measure(dataDir: string, print: (line: string) => void): Promise<Times> {
  // What was just copied or added is on the disk before anything is timed.
  execFileSync('sync');
  const demo = await startBuiltDemo({ DATA_DIR: dataDir });
  try {
    const [charge, steward, admin] = ['charge', 'steward', 'admin'].map((name) => callAs(demo, dataDir, name));
    const cookies = Array.from({ length: people }, () => signIn(dataDir, 'charge').cookie);
    const files = [0, 1, 2, 3, 4, 5].map(makeFile);
    await cancelRecomputing(steward);
    await untilIdle(steward);
    const { times, errors, done } = await underLoad(demo, cookies, async (going) => {
      const [censuses, imports] = await Promise.all([
        saveCensuses(charge, going),
        importLogs(steward, files, going),
        makeBackup(admin),
      ]);
      return { censuses, imports };
    });
    const n = Object.values(times).reduce((sum, each) => sum + each.length, 0);
    print(
      `${String(n)} reads of ${String(people)} people in ${String(seconds)} s, ${String(done.censuses)} censuses, ${String(done.imports)} imports of ${rowsOfImport.toLocaleString('en')} rows; errors: ${String(errors.length)}`,
    );
    for (const [read, each] of Object.entries(times)) {
      const at = (share: number) => quantile(each, share).toFixed(1);
      print(`${read}: ${at(0.5)} ms in the middle, ${at(0.99)} at the 99th percentile, ${at(1)} at most`);
    }
    if (errors.length > 0) throw new Error(`errors: ${errors.slice(0, 5).join('; ')}`);
    if (done.imports === 0) throw new Error('no import ended');
    print(await restoreNewest(dataDir));
    return times;
  } finally {
    await demo.stop();
  }
}

/** A session of an account of the demo as its sign-in would leave it: the cookie and the anti-forgery token. */
function signIn(dataDir: string, username: string): { cookie: string; csrfToken: string } {
  const email = demoAccounts.find((account) => account.username === username)?.email;
  const db = new Database(databaseFile(dataDir));
  try {
    const now = Math.floor(Date.now() / 1000);
    const person = db
      .prepare<unknown[], { id: string }>(
        'SELECT p.id FROM person p JOIN membership m ON m.personId = p.id WHERE p.email = ? LIMIT 1',
      )
      .get(email);
    if (!person) throw new Error(`nobody with a role is called ${username}`);
    const data = { cookie: { path: '/', httpOnly: true }, personId: person.id, signedInAt: now, usedAt: now };
    const sid = randomBytes(16).toString('hex');
    db.prepare('INSERT INTO session (sid, personId, expiresAt, data) VALUES (?, ?, ?, ?)').run(
      ...[sid, person.id, now + 3600, JSON.stringify(data)],
    );
    const signature = createHmac('sha256', demoSecrets[0]).update(sid).digest('base64').replace(/=+$/, '');
    return {
      cookie: `shoalmark=${encodeURIComponent(`s:${sid}.${signature}`)}`,
      csrfToken: antiForgeryToken(demoSecrets[0], sid),
    };
  } finally {
    db.close();
  }
}

/** An account that calls the API; its session is made rather than signed in for, since a copied demo has another provider. */
function callAs(demo: RunningDemo, dataDir: string, username: string): DemoCaller {
  const { cookie, csrfToken } = signIn(dataDir, username);
  const call = async (method: string, path: string, contentType: string, body?: string): Promise<unknown> => {
    const headers = { cookie, 'x-csrf-token': csrfToken, 'content-type': contentType };
    const reply = await fetch(demo.url + path, { method, headers, ...(body === undefined ? {} : { body }) });
    const text = await reply.text();
    if (!reply.ok) throw new Error(`${method} ${path} answered ${String(reply.status)}: ${text.slice(0, 500)}`);
    return text === '' ? null : JSON.parse(text);
  };
  const json = 'application/json';
  return {
    cookie: () => cookie,
    get: (path) => call('GET', path, json),
    send: (method, path, body) => call(method, path, json, JSON.stringify(body)),
    upload: (path, contentType, body) => call('POST', path, contentType, body),
  };
}

/** Lets people look, and others work meanwhile. */
async function underLoad<Done>(
  demo: RunningDemo,
  cookies: string[],
  meanwhile: (going: () => boolean) => Promise<Done>,
): Promise<{ times: Times; errors: string[]; done: Done }> {
  const worker = new Worker(new URL('../support/people-polling.js', import.meta.url), {
    workerData: { url: demo.url, cookies, sitePath, everySeconds, seconds },
  });
  const endAt = performance.now() + seconds * 1000;
  const looked = new Promise<{ times: Times; errors: string[] }>((resolve, reject) => {
    worker.once('message', resolve);
    worker.once('error', reject);
  });
  const done = await meanwhile(() => performance.now() < endAt);
  return { ...(await looked), done };
}

async function saveCensuses(charge: DemoCaller, going: () => boolean): Promise<number> {
  let saved = 0;
  while (going()) {
    const { now } = (await charge.get('/api/session')) as { now: number };
    const areas = site.areas.map(({ id }, index) => {
      return { areaId: id, present: 4 + ((saved + index) % 5), waiting: 1, boarding: 1 };
    });
    const rest = { undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null };
    await charge.send('POST', `${sitePath}/censuses`, { takenAt: now, areas, ...rest });
    saved += 1;
    await pause(censusEverySeconds * 1000);
  }
  return saved;
}

/** A log of its own, made before the load; so far back that it counts beside what is there. */
function makeFile(index: number): string {
  const to = Math.floor(Date.now() / 1000) - 3600;
  const seed = demoSeed + 10 + index + (Date.now() % 1000);
  const visits = makeVisitLog({ site, from: to - 800 * 86_400, to, seed }).slice(-rowsOfImport);
  return writeVisitCsv(visits, site.areas);
}

async function importLogs(steward: DemoCaller, files: readonly string[], going: () => boolean): Promise<number> {
  const logs = `${sitePath}/visit-logs`;
  let done = 0;
  for (const csv of files) {
    if (!going()) break;
    const name = `load-${String(done)}.csv`;
    const { checkId } = (await steward.upload(`${logs}/checks?fileName=${name}`, 'text/csv', csv)) as {
      checkId: string;
    };
    const takenAt = Math.floor(Date.now() / 1000);
    const facts = { selectedBy: 'arrived', takenAt, missingDeparture: 'still present' };
    const { jobId } = (await steward.send('POST', logs, { checkId, goodRowsOnly: true, facts })) as { jobId: string };
    await finishJob(steward, site.id, jobId);
    done += 1;
  }
  return done;
}

/** Asks for a backup in the midst of it, as an administrator does, and waits until it is there. */
async function makeBackup(admin: DemoCaller): Promise<void> {
  await pause(seconds * 300);
  const backups = async () => ((await admin.get('/api/server-status')) as ServerStatus).backups;
  const before = (await backups()).files.at(0)?.name;
  await admin.send('POST', '/api/server-status/backups', {});
  while ((await backups()).underWay) await pause(500);
  if ((await backups()).files.at(0)?.name === before) throw new Error('no backup was made');
}

/** Restores the newest backup into a folder of its own. */
async function restoreNewest(dataDir: string): Promise<string> {
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-restored-'));
  try {
    const newest = (await listBackups(backupDirIn(dataDir))).at(0);
    if (!newest) throw new Error('no backup was made');
    const { facts } = await restoreBackup(newest.file, folder, Math.floor(Date.now() / 1000));
    const equal = JSON.stringify(facts.counts) === JSON.stringify(newest.manifest.counts);
    if (!equal || !facts.chain.whole) throw new Error('the restored database is not what was backed up');
    const rows = Object.values(facts.counts).reduce((sum, each) => sum + each, 0);
    return `backup made meanwhile restored: ${rows.toLocaleString('en')} rows in ${String(Object.keys(facts.counts).length)} tables equal, chain of ${String(facts.chain.rows)} whole`;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function quantile(times: readonly number[], share: number): number {
  return times.toSorted((a, b) => a - b)[Math.ceil(share * times.length) - 1] ?? NaN;
}
