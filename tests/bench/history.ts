import { cpSync } from 'node:fs';
import { makeTempFolder, removeTempFolder } from '../support/temp-folder.ts';
import { startBuiltDemo, type RunningDemo } from '../support/journey.ts';
import { multiplyVisits } from '../support/more-visits.ts';
import { servedDemo, signIn, sitePath } from './demo-server.ts';
import { growthFigures, growthSteps } from './growth.ts';
import { milliseconds, summarise, type Bench, type Figure } from './measure.ts';

const reads = 30;
/** What a person's pages ask for, by who reads them. */
const pages = [
  { name: 'Tonight', username: 'charge', path: `${sitePath}/tonight` },
  { name: 'Week ahead', username: 'operations', path: `${sitePath}/week-outlooks/latest` },
  { name: 'Logs', username: 'steward', path: `${sitePath}/visit-logs` },
  { name: 'Track record', username: 'operations', path: `${sitePath}/track-record` },
] as const;
/** The exponent of 1.5 times the time for 30 times the visits: what counts as flat. */
const flat = 0.12;

async function timeReads(demo: RunningDemo): Promise<Map<string, number[]>> {
  const times = new Map<string, number[]>();
  for (const { name, username, path } of pages) {
    const caller = await signIn(demo, username);
    const own: number[] = [];
    for (let turn = 0; turn < reads + 5; turn += 1) own.push(await milliseconds(() => caller.get(path)));
    times.set(name, own.slice(5));
  }
  return times;
}

/** The same pages with 1, 3, 10 and 30 times the visits, each in a copy of the demo's data. */
async function benchHistory(): Promise<Figure[]> {
  const first = await servedDemo();
  const byPage = new Map<string, Figure[]>(pages.map(({ name }) => [name, []]));
  const visits: number[] = [];
  await first.pause();
  for (const step of growthSteps) {
    const dataDir = makeTempFolder('history');
    cpSync(first.dataDir, dataDir, { recursive: true });
    const before = multiplyVisits(dataDir, 0);
    const held = step === 1 ? before : multiplyVisits(dataDir, before * step);
    visits.push(held);
    // At the same address, since people are known by their provider's.
    const demo = await startBuiltDemo({ DATA_DIR: dataDir, PORT: new URL(first.url).port });
    try {
      for (const [name, times] of await timeReads({ ...demo, url: first.url })) {
        byPage
          .get(name)
          ?.push(
            summarise(
              { name: `${name} read, ${held.toLocaleString('en')} visits, median`, unit: 'ms', better: 'lower' },
              times,
              0.5,
            ),
          );
      }
    } finally {
      await demo.stop();
      removeTempFolder(dataDir);
    }
  }
  await first.resume();
  return [...byPage].flatMap(([name, times]) => growthFigures(`${name} read`, 'visits', visits, times, flat));
}

export const historyBenches: Bench[] = [{ name: 'history', run: benchHistory }];
