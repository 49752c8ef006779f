import { once } from 'node:events';
import { Worker } from 'node:worker_threads';
import type * as ExactNeed from '../../shared/forecasting/exact-need.ts';
import type * as FactorNodes from '../../shared/forecasting/factor-nodes.ts';
import type * as FiniteBeds from '../../shared/forecasting/finite-beds.ts';
import type * as IssueOutlook from '../../shared/forecasting/issue-outlook.ts';
import { built } from './built.ts';
import { measure, milliseconds, summarise, type Bench } from './measure.ts';
import { demoModel, outlookInput } from './site-log.ts';

interface NeedSpeed {
  /** Million patients a second, by the clock and by processor time. */
  clock: number;
  processor: number;
}

const inThread = `
  const { parentPort, workerData } = require('node:worker_threads');
  const built = (file) => import(new URL(file, workerData.from).href);
  Promise.all([built('prepare-need.js'), built('simulate-need.js')]).then(([{ prepareNeed }, { simulateNeedPart }]) => {
    const { plan } = prepareNeed(workerData.model, workerData.input);
    parentPort.on('message', () => {
      const startedAt = performance.now();
      const before = process.cpuUsage();
      const { patients } = simulateNeedPart(plan, 0, 10_000);
      const { user, system } = process.cpuUsage(before);
      parentPort.postMessage({
        clock: patients / (performance.now() - startedAt) / 1000,
        processor: patients / (user + system),
      });
    });
  });
`;

/**
 * Speeds of the need simulation as it is shipped: the built files in a thread of their own, as the server has them.
 */
async function needSpeeds(runs: number): Promise<NeedSpeed[]> {
  const from = new URL('../../dist/shared/forecasting/', import.meta.url).href;
  const workerData = { from, model: await demoModel(), input: outlookInput(10_000) };
  const thread = new Worker(inThread, { eval: true, execArgv: [], workerData });
  const speeds: NeedSpeed[] = [];
  for (let run = 0; run < runs; run += 1) {
    thread.postMessage('run');
    const [speed] = (await once(thread, 'message')) as [NeedSpeed];
    speeds.push(speed);
  }
  await thread.terminate();
  // The first run is the compiler's.
  return speeds.slice(1);
}

export const engineBenches: Bench[] = [
  {
    name: 'need simulation',
    run: async () => {
      const speeds = await needSpeeds(8);
      const { issueOutlook } = await built<typeof IssueOutlook>('forecasting/issue-outlook');
      const model = await demoModel();
      const figure = { unit: 'million patients/s', better: 'higher', goal: 8 } as const;
      return [
        summarise(
          { name: 'need simulation, 5 areas × 36 h, one core, by the clock', ...figure },
          speeds.map(({ clock }) => clock),
          0.5,
        ),
        summarise(
          { name: 'need simulation, the same by processor time', ...figure },
          speeds.map(({ processor }) => processor),
          0.5,
        ),
        await measure({ name: 'whole outlook, 10,000 replications, one core', unit: 'ms', better: 'lower' }, () =>
          milliseconds(() => issueOutlook(model, outlookInput(10_000))),
        ),
      ];
    },
  },
  {
    name: 'exact methods',
    run: async () => {
      const { exactNeed } = await built<typeof ExactNeed>('forecasting/exact-need');
      const { lognormalNodes } = await built<typeof FactorNodes>('forecasting/factor-nodes');
      const { finiteBeds } = await built<typeof FiniteBeds>('forecasting/finite-beds');
      const hours = new Float64Array(168).fill(1);
      const rate = Float64Array.from({ length: 168 }, (_, k) => 0.5 + 0.4 * Math.sin(((k - 9) * Math.PI) / 12));
      const hazard = Float64Array.from({ length: 168 }, (_, k) => 0.22 + 0.05 * Math.sin(((k - 14) * Math.PI) / 12));
      const nodes = lognormalNodes(0.03, 3);
      const beds = {
        hours,
        ratePerHour: rate.map((value) => value * 22),
        hazardPerHour: hazard,
        beds: new Int32Array(168).fill(60),
        start: 40,
      };
      return [
        await measure(
          { name: 'exact need, 6 areas × 168 h with factor nodes', unit: 'ms', better: 'lower', goal: 10 },
          () =>
            milliseconds(() => {
              for (let area = 0; area < 6; area += 1) {
                const streams = [1.6, 0.8, 0.2, 0.1].map((scale) => ({
                  ratePerHour: rate.map((value) => value * scale * (1 + area / 2)),
                  hazardPerHour: hazard,
                }));
                exactNeed({
                  hours,
                  streams,
                  present: [{ patients: 12, shares: [0.5, 0.4, 0.05, 0.05] }],
                  arrivalVariance: 0.003,
                  outflowFactor: nodes,
                });
              }
            }),
          // A drag asks for it over and over; the first few runs pay for the compiling.
          40,
        ),
        await measure({ name: 'exact finite beds, 60 beds × 168 h', unit: 'ms', better: 'lower', goal: 200 }, () =>
          milliseconds(() => finiteBeds(beds)),
        ),
        await measure({ name: 'exact finite beds with the day factor', unit: 'ms', better: 'lower', goal: 2000 }, () =>
          milliseconds(() => {
            for (const { value } of nodes)
              finiteBeds({ ...beds, ratePerHour: beds.ratePerHour.map((each) => each * value) });
          }),
        ),
      ];
    },
  },
];
