import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { signInToDemo, type DemoCaller } from '../../demo/demo-caller.ts';
import { demoSeed, demoSites } from '../../demo/farrowmere.ts';
import { finishJob } from '../../demo/live-history.ts';
import { makeVisitLog } from '../../demo/make-visit-log.ts';
import { writeVisitCsv } from '../../demo/write-visit-csv.ts';
import { startBuiltDemo, type RunningDemo } from '../support/journey.ts';
import { askMeanwhile } from './other-requests.ts';
import { measure, milliseconds, summarise, type Bench, type Figure } from './measure.ts';

const site = demoSites[0];
const sitePath = `/api/sites/${site.id}`;
const million = 1_000_000;

function signIn(demo: RunningDemo, username: string): Promise<DemoCaller> {
  return signInToDemo({ baseUrl: demo.url, localUrl: demo.url }, username, 'demo');
}

/** Saves a census that differs a little from the last, and answers with the milliseconds until the new outlook is there. */
function makeSave(charge: DemoCaller) {
  let turn = 0;
  return async () => {
    const { now } = (await charge.get('/api/session')) as { now: number };
    turn += 1;
    const body = {
      takenAt: now,
      areas: site.areas.map(({ id }, index) => ({
        areaId: id,
        present: 4 + ((turn + index) % 5),
        waiting: 1,
        boarding: 1,
      })),
      undecidedWaiting: null,
      ambulancesHolding: null,
      arrivalsSinceMidnight: null,
    };
    return milliseconds(() => charge.send('POST', `${sitePath}/censuses`, body));
  };
}

/** Peak resident memory of a process in MB, as the system counts it. */
function peakMemory(pid: number): number {
  return Number(/VmHWM:\s+(\d+)/.exec(readFileSync(`/proc/${String(pid)}/status`, 'utf8'))?.[1] ?? NaN) / 1024;
}

/** Resident memory of a process now, in MB. */
function memoryNow(pid: number): number {
  return Number(/VmRSS:\s+(\d+)/.exec(readFileSync(`/proc/${String(pid)}/status`, 'utf8'))?.[1] ?? NaN) / 1024;
}

async function benchSaves(demo: RunningDemo): Promise<Figure[]> {
  const figures: Figure[] = [];
  const one = makeSave(await signIn(demo, 'charge'));
  figures.push(
    await measure(
      { name: 'census saved → outlook stored, one nurse', unit: 'ms', better: 'lower', goal: 500 },
      one,
      15,
    ),
  );
  const nurses = await Promise.all(Array.from({ length: 5 }, () => signIn(demo, 'charge')));
  const saves = nurses.map(makeSave);
  const times: number[] = [];
  for (let round = 0; round < 4; round += 1) {
    times.push(
      ...(await Promise.all(
        saves.map(async (save, index) => {
          await new Promise((resolve) => setTimeout(resolve, index * 1000));
          return save();
        }),
      )),
    );
  }
  figures.push(
    summarise(
      { name: 'the same, five nurses of one site within five seconds', unit: 'ms', better: 'lower', goal: 1000 },
      times,
      0.95,
    ),
  );
  return figures;
}

async function benchReads(demo: RunningDemo): Promise<Figure[]> {
  const charge = await signIn(demo, 'charge');
  const times: number[] = [];
  for (let turn = 0; turn < 100; turn += 1) times.push(await milliseconds(() => charge.get(`${sitePath}/tonight`)));
  return [
    summarise(
      { name: 'Tonight read by the page, 99th percentile', unit: 'ms', better: 'lower', goal: 100 },
      times,
      0.99,
    ),
  ];
}

/** A million rows through check and import, other requests meanwhile, beside sqlite3's own unchecked .import. */
async function benchImport(demo: RunningDemo): Promise<Figure[]> {
  const steward = await signIn(demo, 'steward');
  const charge = await signIn(demo, 'charge');
  const now = Math.floor(Date.now() / 1000) - 3600;
  const visits = makeVisitLog({ site, from: now - 3900 * 86_400, to: now, seed: demoSeed + 1 }).slice(-million);
  const csv = writeVisitCsv(visits, site.areas);
  const peakBefore = peakMemory(demo.pid);
  const memoryBefore = memoryNow(demo.pid);
  // The kernel starts the peak again from what is resident now.
  writeFileSync(`/proc/${String(demo.pid)}/clear_refs`, '5');
  const stopAsking = askMeanwhile(demo.url, charge.cookie(), [
    '/api/sites/saltby-bay/census',
    '/api/session',
    `${sitePath}/tonight`,
  ]);
  const logs = `${sitePath}/visit-logs`;
  let checkId = '';
  const check = await milliseconds(async () => {
    ({ checkId } = (await steward.upload(`${logs}/checks?fileName=bench.csv`, 'text/csv', csv)) as { checkId: string });
  });
  const load = await milliseconds(async () => {
    const facts = { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' };
    const { jobId } = (await steward.send('POST', logs, { checkId, goodRowsOnly: true, facts })) as { jobId: string };
    await finishJob(steward, site.id, jobId);
  });
  const others = await stopAsking();
  const beside = plainImport(csv);
  const once = (name: string, value: number, goal?: number, compare: Figure['compare'] = null): Figure => ({
    ...summarise({ name, unit: 's', better: 'lower', ...(goal === undefined ? {} : { goal }) }, [value], 0.5),
    compare,
    ratio: compare === null ? null : compare.value / value,
  });
  const rows = visits.length.toLocaleString('en');
  return [
    once(`check of ${rows} rows`, check / 1000),
    once(
      `import of ${rows} rows`,
      load / 1000,
      15,
      beside === null ? null : { name: 'sqlite3 .import', value: beside },
    ),
    summarise(
      { name: 'other requests meanwhile, 99th percentile', unit: 'ms', better: 'lower', goal: 100 },
      others,
      0.99,
    ),
    megabytes('peak memory until then: the demo made, loaded and fitted in the same process', peakBefore),
    megabytes('memory before the import', memoryBefore),
    megabytes('peak memory of check and import', peakMemory(demo.pid)),
  ];
}

function megabytes(name: string, value: number): Figure {
  return summarise({ name, unit: 'MB', better: 'lower' }, [value], 0.5);
}

function plainImport(csv: string): number | null {
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-bench-'));
  try {
    const file = join(folder, 'rows.csv');
    writeFileSync(file, csv);
    const startedAt = performance.now();
    execFileSync('sqlite3', [join(folder, 'plain.sqlite'), '.mode csv', `.import ${file} visits`]);
    return (performance.now() - startedAt) / 1000;
  } catch {
    return null;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

let demo: RunningDemo | null = null;
const startTimes: number[] = [];
async function runningDemo(): Promise<RunningDemo> {
  if (demo) return demo;
  const startedAt = performance.now();
  demo = await startBuiltDemo();
  startTimes.push((performance.now() - startedAt) / 1000);
  return demo;
}

/** Figures of the built product with its demo; `npm run build` first. */
export const servedBenches: Bench[] = [
  {
    name: 'start',
    run: async () => {
      await runningDemo();
      return [
        summarise(
          { name: 'demo from an empty folder to usable', unit: 's', better: 'lower', goal: 60 },
          startTimes,
          0.5,
        ),
      ];
    },
  },
  { name: 'save', run: async () => benchSaves(await runningDemo()) },
  { name: 'reads', run: async () => benchReads(await runningDemo()) },
  { name: 'import', run: async () => benchImport(await runningDemo()) },
];

/** Stops what the benches started. */
export async function stopServed(): Promise<void> {
  await demo?.stop();
}
