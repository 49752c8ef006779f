import { spawn } from 'node:child_process';
import { cpSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import type { VisitLogCheck } from '../../shared/api/visit-logs.ts';
import { makeStream } from '../../shared/stochastic/random.ts';
import { openDatabase } from '../../server/database/database.ts';
import { readSiteVisits } from '../../server/database/read-visits.ts';
import { Visit } from '../../server/entities/Visit.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { buildPerson, buildSite } from './build-site.ts';
import { buildVisitCsv } from './build-visit-csv.ts';
import { makeTempFolder, removeTempFolder } from './temp-folder.ts';
import { openTestServer } from './test-server.ts';

const now = 1_790_000_000;

/** What was found after one kill, and after the start that followed. */
export interface KilledImport {
  /** Milliseconds after the jobs began. */
  killedAfter: number;
  /** The import was over before it was killed. */
  wasDone: boolean;
  statusAfterKill: VisitLog['status'];
  /** Visits that count for the site, and rows that stand in the table. */
  countedAfterKill: number;
  storedAfterKill: number;
  statusAfterStart: VisitLog['status'];
  countedAfterStart: number;
  storedAfterStart: number;
  /** Files left in the temporary folder after the start. */
  left: string[];
}

/** Makes a data folder with an accepted file whose rows are still to be loaded. */
async function prepare(rows: number): Promise<{ folder: string; siteId: string }> {
  const server = await openTestServer({ now });
  const folder = makeTempFolder('kill');
  try {
    const { site } = await buildSite(server.deps.database);
    const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: site.id }]);
    const steward = await server.signedInAs(person.id);
    const logs = `/api/sites/${site.id}/visit-logs`;
    const csv = buildVisitCsv({ from: now - rows * 60 - 86_400, rows, everySeconds: 60 });
    const checked = await steward.send('post', `${logs}/checks`).set('content-type', 'text/csv').send(csv);
    if (checked.status !== 201) throw new Error(checked.text);
    const accepted = await steward.send('post', logs, {
      checkId: (checked.body as VisitLogCheck).checkId,
      goodRowsOnly: false,
      facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' },
    });
    if (accepted.status !== 202) throw new Error(accepted.text);
    await server.deps.database.write((manager) => manager.query('PRAGMA wal_checkpoint(TRUNCATE)'));
    cpSync(server.deps.config.dataDir, folder, { recursive: true });
    return { folder, siteId: site.id };
  } finally {
    await server.close();
  }
}

/** Runs a server on the folder; kills it so many milliseconds after its jobs began, if that is given. */
async function run(folder: string, killAfter: number | null): Promise<{ took: number; wasDone: boolean }> {
  const child = spawn(process.execPath, ['--import', 'tsx', 'tests/support/import-child.ts', folder], {
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  let begunAt = 0;
  let doneAt = 0;
  const ended = new Promise<void>((resolve) => child.once('close', () => resolve()));
  const begun = new Promise<void>((resolve, reject) => {
    child.once('error', reject);
    child.once('close', () => reject(new Error('The server ended before its jobs began.')));
    child.stdout.on('data', (data: Buffer) => {
      if (begunAt === 0) begunAt = performance.now();
      resolve();
      if (data.toString().includes('done')) doneAt = performance.now();
    });
  });
  await begun;
  if (killAfter !== null) {
    await Promise.race([wait(killAfter), ended]);
    child.kill('SIGKILL');
  }
  await ended;
  if (killAfter === null && doneAt === 0) throw new Error('The server ended before its jobs did.');
  return { took: doneAt - begunAt, wasDone: doneAt > 0 };
}

async function look(folder: string, siteId: string) {
  const database = await openDatabase(folder);
  try {
    const [log] = await database.read.findBy(VisitLog, { siteId });
    return {
      status: log.status,
      counted: readSiteVisits(database.file, siteId).table.length,
      stored: await database.read.countBy(Visit, { logNumber: log.number }),
    };
  } finally {
    await database.close();
  }
}

/**
 * Kills a server (SIGKILL) at random moments of an import, each time on a fresh copy of the same data folder, and starts
 * another on what it left.
 */
export async function killImports(
  { rows, kills, seed }: { rows: number; kills: number; seed: number },
  onKill: (killed: KilledImport) => void,
): Promise<void> {
  const { folder, siteId } = await prepare(rows);
  const folders = [folder];
  const copy = () => {
    const made = makeTempFolder('kill');
    folders.push(made);
    cpSync(folder, made, { recursive: true });
    return made;
  };
  try {
    const { took } = await run(copy(), null);
    const stream = makeStream(seed, 1);
    for (let kill = 0; kill < kills; kill += 1) {
      const trial = copy();
      const killedAfter = stream.uniform() * took;
      const { wasDone } = await run(trial, killedAfter);
      const after = await look(trial, siteId);
      await run(trial, null);
      const again = await look(trial, siteId);
      onKill({
        killedAfter,
        wasDone,
        statusAfterKill: after.status,
        countedAfterKill: after.counted,
        storedAfterKill: after.stored,
        statusAfterStart: again.status,
        countedAfterStart: again.counted,
        storedAfterStart: again.stored,
        left: readdirSync(join(trial, 'tmp')),
      });
    }
  } finally {
    for (const made of folders) removeTempFolder(made);
  }
}
