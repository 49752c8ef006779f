import { startBuiltDemo } from '../support/journey.ts';
import { multiplyOutlooks } from '../support/more-outlooks.ts';
import { cancelRecomputing, servedSite, signIn, sitePath } from './demo-server.ts';
import { milliseconds, summarise, type Bench, type Figure } from './measure.ts';

const outlooks = 5000;
const reads = 40;
const longestMinutes = 20;
/** What a person looks at in turn: the page as it opens, an area, shifts, days. */
const filters = ['', `?area=${servedSite.areas[0].id}&lead=12`, '?measure=peak&lead=0', '?measure=arrivals&lead=0'];

const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/** The page of a year's record with as many outlooks as an hourly timetable issues in seven months. */
async function benchRecord(): Promise<Figure[]> {
  const demo = await startBuiltDemo();
  try {
    const steward = await signIn(demo, 'steward');
    const recomputing = async () =>
      ((await steward.get(`${sitePath}/track-record`)) as { recomputing: string | null }).recomputing !== null;
    const until = performance.now() + longestMinutes * 60_000;
    while (await recomputing()) {
      if (performance.now() > until) throw new Error('the record took too long to be recomputed');
      await pause(3000);
    }
    await demo.pause();
    const held = multiplyOutlooks(demo.dataDir, servedSite.id, outlooks);
    await demo.resume();
    // Of the other sites.
    await cancelRecomputing(await signIn(demo, 'steward'));
    const caller = await signIn(demo, 'operations');
    const times: number[] = [];
    for (let turn = 0; turn < reads + filters.length; turn += 1) {
      const path = `${sitePath}/track-record${filters[turn % filters.length]}`;
      const taken = await milliseconds(() => caller.get(path));
      // The first of each opens the database's pages.
      if (turn >= filters.length) times.push(taken);
    }
    const name = `Track record with ${held.toLocaleString('en')} outlooks`;
    return ([0.5, 0.95] as const).map((quantile) =>
      summarise(
        {
          name: `${name}, ${quantile === 0.5 ? 'median' : '95th percentile'}`,
          unit: 'ms',
          better: 'lower',
          goal: 200,
        },
        times,
        quantile,
      ),
    );
  } finally {
    await demo.stop();
  }
}

export const recordBenches: Bench[] = [{ name: 'track record', onlyByName: true, run: benchRecord }];
