import type * as SimulateNeed from '../../shared/forecasting/simulate-need.ts';
import type * as PrepareNeed from '../../shared/forecasting/prepare-need.ts';
import type * as WaitingSimulation from '../../shared/forecasting/waiting-simulation.ts';
import { built } from './built.ts';
import { measure, milliseconds, single, type Bench, type Figure } from './measure.ts';
import { demoModel, makeFit, outlookInput, siteLog } from './site-log.ts';
import { waitingPlan } from './waiting.ts';

/** How much more work is asked for, step by step. */
export const growthSteps = [1, 3, 10, 30] as const;

/** Slope of log time on log work by least squares: 1 is linear, 0 is flat. */
export function growthExponent(work: readonly number[], time: readonly number[]): number {
  const x = work.map(Math.log);
  const y = time.map(Math.log);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const [mx, my] = [mean(x), mean(y)];
  const above = x.reduce((sum, value, i) => sum + (value - mx) * (y[i] - my), 0);
  return above / x.reduce((sum, value) => sum + (value - mx) ** 2, 0);
}

/** The figures of a growth: time at every step, and the exponent against the most that is asked for. */
export function growthFigures(
  name: string,
  of: string,
  work: readonly number[],
  times: readonly Figure[],
  goal: number,
): Figure[] {
  const exponent = growthExponent(
    work,
    times.map(({ value }) => value),
  );
  return [
    ...times,
    single({ name: `growth of ${name} in ${of}, exponent`, unit: 'power', better: 'lower', goal }, exponent),
  ];
}

async function grow(
  name: string,
  of: string,
  first: number,
  runs: number,
  prepare: (work: number) => () => unknown,
): Promise<Figure[]> {
  const work = growthSteps.map((step) => step * first);
  const times: Figure[] = [];
  for (const amount of work) {
    const run = prepare(amount);
    times.push(
      await measure(
        { name: `${name}, ${amount.toLocaleString('en')} ${of}`, unit: 'ms', better: 'lower' },
        () => milliseconds(run),
        runs,
      ),
    );
  }
  return growthFigures(name, of, work, times, 1.1);
}

export const growthBenches: Bench[] = [
  {
    name: 'growth of simulation',
    run: async () => {
      const { prepareNeed } = await built<typeof PrepareNeed>('forecasting/prepare-need');
      const { simulateNeedPart } = await built<typeof SimulateNeed>('forecasting/simulate-need');
      const { simulateWaitingPart } = await built<typeof WaitingSimulation>('forecasting/waiting-simulation');
      const { plan } = prepareNeed(await demoModel(), outlookInput(30_000));
      const patients = (replications: number) => simulateNeedPart(plan, 0, replications).patients;
      const perReplication = patients(100) / 100;
      const waiting = waitingPlan();
      const waitingPerReplication = simulateWaitingPart(waiting, 0, 100).patients / 100;
      const replicationsFor = (amount: number, each: number) => Math.max(1, Math.round(amount / each));
      return [
        ...(await grow('need simulation', 'patients', 100_000, 3, (amount) => () => {
          simulateNeedPart(plan, 0, replicationsFor(amount, perReplication));
        })),
        ...(await grow('waiting simulation', 'patients', 100_000, 3, (amount) => () => {
          simulateWaitingPart(waiting, 0, replicationsFor(amount, waitingPerReplication));
        })),
      ];
    },
  },
  {
    name: 'growth of fit',
    run: async () => {
      const fit = await makeFit();
      return grow('fit of three years', 'visits', 15_000, 1, (visits) => {
        const log = siteLog(3, visits);
        return () => fit(log);
      });
    },
  },
];
