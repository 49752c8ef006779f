import type { DemoCaller } from '../../demo/demo-caller.ts';
import { databaseFile } from '../../server/database/database.ts';
import type { RunningDemo } from '../support/journey.ts';
import { cloneSites } from './clone-sites.ts';
import { demoStartSeconds, memoryOf, servedDemo, servedSite, signIn, sitePath } from './demo-server.ts';
import { askMeanwhile } from './other-requests.ts';
import { measure, milliseconds, single, summarise, type Bench, type Figure } from './measure.ts';
import { benchDrag } from './what-if-browser.ts';

/** Saves a census that differs a little from the last, and answers with the milliseconds until the new outlook is there. */
function makeSave(charge: DemoCaller, siteId = servedSite.id) {
  let turn = 0;
  return async () => {
    const { now } = (await charge.get('/api/session')) as { now: number };
    turn += 1;
    const body = {
      takenAt: now,
      areas: servedSite.areas.map(({ id }, index) => ({
        areaId: id.replace(servedSite.id, siteId),
        present: 4 + ((turn + index) % 5),
        waiting: 1,
        boarding: 1,
      })),
      undecidedWaiting: null,
      ambulancesHolding: null,
      arrivalsSinceMidnight: null,
    };
    return milliseconds(() => charge.send('POST', `/api/sites/${siteId}/censuses`, body));
  };
}

const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/** Rounds in which some nurses of the site save within five seconds; the milliseconds of each save. */
async function saveTogether(demo: RunningDemo, nurses: number, rounds: number): Promise<number[]> {
  const callers = await Promise.all(Array.from({ length: nurses }, () => signIn(demo, 'charge')));
  const saves = callers.map((caller) => makeSave(caller));
  const times: number[] = [];
  for (let round = 0; round < rounds; round += 1) {
    const saving = saves.map(async (save, index) => {
      await pause((index * 5000) / nurses);
      return save();
    });
    times.push(...(await Promise.all(saving)));
  }
  return times;
}

async function benchSaves(): Promise<Figure[]> {
  const demo = await servedDemo();
  const one = makeSave(await signIn(demo, 'charge'));
  const alone = await measure(
    { name: 'census saved → outlook stored, one nurse', unit: 'ms', better: 'lower', goal: 500 },
    one,
    15,
  );
  const five = await saveTogether(demo, 5, 4);
  const paths = [`${sitePath}/tonight`, '/api/session', `${sitePath}/week-outlooks/latest`];
  const stopAsking = askMeanwhile(demo.url, (await signIn(demo, 'charge')).cookie(), paths);
  const twenty = await saveTogether(demo, 20, 2);
  const reads = await stopAsking();
  const together = { unit: 'ms', better: 'lower' } as const;
  return [
    alone,
    summarise({ name: 'five nurses of one site within five seconds, median', ...together, goal: 500 }, five, 0.5),
    summarise(
      { name: 'five nurses of one site within five seconds, 95th percentile', ...together, goal: 1000 },
      five,
      0.95,
    ),
    summarise({ name: 'twenty nurses of one site within five seconds, median', ...together }, twenty, 0.5),
    summarise({ name: 'twenty nurses of one site within five seconds, 95th percentile', ...together }, twenty, 0.95),
    summarise({ name: 'reads while twenty save, 25 a second, 99th percentile', ...together, goal: 100 }, reads, 0.99),
  ];
}

/** One nurse at each of five sites saves at the same moment. */
async function benchFiveSites(): Promise<Figure[]> {
  const demo = await servedDemo();
  const sites = [servedSite.id, ...cloneSites(databaseFile(demo.dataDir), servedSite.id, 4)];
  const saves = await Promise.all(sites.map(async (id) => makeSave(await signIn(demo, 'charge'), id)));
  const rounds: number[] = [];
  for (let round = 0; round < 6; round += 1) {
    const times = await Promise.all(saves.map((save) => save()));
    // The first round reads every site's model for the first time.
    if (round > 0) rounds.push(Math.max(...times));
  }
  return [
    summarise(
      { name: 'five sites at once, the last of them has its outlook', unit: 'ms', better: 'lower', goal: 2500 },
      rounds,
      0.5,
    ),
  ];
}

async function benchReads(): Promise<Figure[]> {
  const charge = await signIn(await servedDemo(), 'charge');
  const times: number[] = [];
  for (let turn = 0; turn < 110; turn += 1) times.push(await milliseconds(() => charge.get(`${sitePath}/tonight`)));
  return [
    summarise(
      { name: 'Tonight read by the page, 99th percentile', unit: 'ms', better: 'lower', goal: 100 },
      times.slice(10),
      0.99,
    ),
  ];
}

/** Figures of the built product with its demo; `npm run build` first. */
export const servedBenches: Bench[] = [
  {
    name: 'start',
    run: async () => {
      const demo = await servedDemo();
      const first = { name: 'demo from an empty folder to usable', unit: 's', better: 'lower', goal: 60 } as const;
      const figures = [single(first, demoStartSeconds())];
      figures.push(
        single(
          { name: 'peak memory of that: made, loaded and fitted in one process', unit: 'MB', better: 'lower' },
          memoryOf(demo.pid, 'peak'),
        ),
        single({ name: 'memory after it', unit: 'MB', better: 'lower' }, memoryOf(demo.pid, 'now')),
      );
      await demo.pause();
      const again = await milliseconds(() => demo.resume());
      await pause(3000);
      figures.push(
        single({ name: 'demo started again on its data, usable', unit: 's', better: 'lower' }, again / 1000),
        single({ name: 'memory at rest after that', unit: 'MB', better: 'lower' }, memoryOf(demo.pid, 'now')),
      );
      return figures;
    },
  },
  { name: 'reads', run: benchReads },
  { name: 'what if in the browser', run: benchDrag },
  { name: 'save', run: benchSaves },
  { name: 'save at five sites', run: benchFiveSites },
];
