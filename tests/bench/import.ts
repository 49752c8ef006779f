import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import type { DemoCaller } from '../../demo/demo-caller.ts';
import { demoSeed } from '../../demo/farrowmere.ts';
import { finishJob } from '../../demo/live-history.ts';
import { makeVisitLog } from '../../demo/make-visit-log.ts';
import { writeVisitCsv } from '../../demo/write-visit-csv.ts';
import { memoryOf, servedDemo, servedSite, signIn, sitePath, untilIdle } from './demo-server.ts';
import { growthFigures, growthSteps } from './growth.ts';
import { milliseconds, single, summarise, type Bench, type Figure } from './measure.ts';
import { askMeanwhile } from './other-requests.ts';
import { isPresent, sqlite } from './peers/peer.ts';

const million = 1_000_000;
/** What a server does at its start is over by then, milliseconds. */
const settling = 3000;

interface Load {
  /** Seconds. */
  check: number;
  load: number;
}

/** Sends a file, waits for its check, accepts it and waits until its visits count. */
async function loadFile(steward: DemoCaller, csv: string, takenAt: number): Promise<Load> {
  const logs = `${sitePath}/visit-logs`;
  let checkId = '';
  const check = await milliseconds(async () => {
    ({ checkId } = (await steward.upload(`${logs}/checks?fileName=bench.csv`, 'text/csv', csv)) as { checkId: string });
  });
  const load = await milliseconds(async () => {
    const facts = { selectedBy: 'arrived', takenAt, missingDeparture: 'still present' };
    const { jobId } = (await steward.send('POST', logs, { checkId, goodRowsOnly: true, facts })) as { jobId: string };
    await finishJob(steward, servedSite.id, jobId);
  });
  return { check: check / 1000, load: load / 1000 };
}

/** Seconds that sqlite3's own import of the same rows takes, which checks nothing; the median of three. */
function plainImport(csv: string): number | null {
  if (!isPresent(sqlite)) return null;
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-bench-'));
  try {
    const file = join(folder, 'rows.csv');
    writeFileSync(file, csv);
    const times = [0, 1, 2].map((run) => {
      const startedAt = performance.now();
      execFileSync(sqlite.program, [
        join(folder, `plain-${String(run)}.sqlite`),
        '.mode csv',
        `.import ${file} visits`,
      ]);
      return (performance.now() - startedAt) / 1000;
    });
    return times.sort((a, b) => a - b)[1];
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Files of growing length through check and import; the longest, a million rows, with other requests meanwhile. */
async function benchImport(): Promise<Figure[]> {
  const demo = await servedDemo();
  // A server as it runs in a hospital: the demo's own first start made visits and fitted models in its process.
  const restarted = async () => {
    const steward = await signIn(demo, 'steward');
    // What the last load asked for (scores, the level) ends first, so that the memory is that of one load.
    await setTimeout(settling);
    await untilIdle(steward);
    await demo.pause();
    await demo.resume();
    await setTimeout(settling);
    return signIn(demo, 'steward');
  };
  const now = Math.floor(Date.now() / 1000) - 3600;
  const visits = makeVisitLog({ site: servedSite, from: now - 3900 * 86_400, to: now, seed: demoSeed + 1 }).slice(
    -million,
  );
  const most = growthSteps[growthSteps.length - 1];
  const work = growthSteps.map((step) => Math.round((visits.length * step) / most));
  const grown: Figure[] = [];
  const seconds = { unit: 's', better: 'lower' } as const;
  for (const rows of work.slice(0, -1)) {
    const steward = await restarted();
    const { check, load } = await loadFile(steward, writeVisitCsv(visits.slice(-rows), servedSite.areas), now);
    grown.push(single({ name: `check and import, ${rows.toLocaleString('en')} rows`, ...seconds }, check + load));
  }
  const csv = writeVisitCsv(visits, servedSite.areas);
  const steward = await restarted();
  const charge = await signIn(demo, 'charge');
  const memoryBefore = memoryOf(demo.pid, 'now');
  // The kernel starts the peak again from what is resident now.
  writeFileSync(`/proc/${String(demo.pid)}/clear_refs`, '5');
  const asked = ['/api/sites/saltby-bay/census', '/api/session', `${sitePath}/tonight`];
  // A server that has just started compiles what it is asked for the first time.
  for (let turn = 0; turn < 10; turn += 1) for (const path of asked) await charge.get(path);
  const stopAsking = askMeanwhile(demo.url, charge.cookie(), asked);
  const { check, load } = await loadFile(steward, csv, now);
  const others = await stopAsking();
  const peak = memoryOf(demo.pid, 'peak');
  const beside = plainImport(csv);
  const rows = visits.length.toLocaleString('en');
  grown.push(single({ name: `check and import, ${rows} rows`, ...seconds }, check + load));
  const compare = beside === null ? null : { name: sqlite.name, value: beside };
  const megabytes = { unit: 'MB', better: 'lower' } as const;
  return [
    single({ name: `check of ${rows} rows`, ...seconds }, check),
    // At most three times as long as the import that checks nothing.
    single({ name: `import of ${rows} rows`, ...seconds, goal: 15, goalRatio: 1 / 3, compare }, load),
    summarise(
      { name: 'other requests meanwhile, 99th percentile', unit: 'ms', better: 'lower', goal: 100 },
      others,
      0.99,
    ),
    single({ name: 'memory before the import', ...megabytes }, memoryBefore),
    single({ name: 'peak memory of check and import', ...megabytes, goal: 400 }, peak),
    ...growthFigures('check and import', 'rows', work, grown, 1.1),
  ];
}

export const importBenches: Bench[] = [{ name: 'import', run: benchImport }];
