import { once } from 'node:events';
import { Worker } from 'node:worker_threads';
import { makeVisitLog } from '../../demo/make-visit-log.ts';
import { demoSeed, demoSites } from '../../demo/farrowmere.ts';
import { calendarDays, outages } from '../../demo/farrowmere-calendar.ts';
import { dispositionCode } from '../../shared/domain/disposition.ts';
import { localDate, makeZone } from '../../shared/domain/zoned-time.ts';
import { countHourly } from '../../shared/forecasting/count-hourly.ts';
import { evaluateArrivals } from '../../shared/forecasting/evaluate-arrivals.ts';
import { exactNeed } from '../../shared/forecasting/exact-need.ts';
import { lognormalNodes } from '../../shared/forecasting/factor-nodes.ts';
import { finiteBeds } from '../../shared/forecasting/finite-beds.ts';
import { fitArrivals } from '../../shared/forecasting/fit-arrivals.ts';
import { fitStays } from '../../shared/forecasting/fit-stays.ts';
import { issueOutlook } from '../../shared/forecasting/issue-outlook.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import type { OutlookModel } from '../../shared/forecasting/prepare-need.ts';
import type { CalendarDay, ExposureGap, VisitTable } from '../../shared/forecasting/visit-table.ts';
import { simulateWaitingPart, type WaitingPlan } from '../../shared/forecasting/waiting-simulation.ts';
import { measure, milliseconds, summarise, type Bench } from './measure.ts';
import { whatIfBenches } from './what-if.ts';

const hour = 3600;
const day = 86_400;
const site = demoSites[0];
const zone = makeZone(site.timeZone);
/** The bench's own now: a fixed Tuesday evening, so that every run does the same work. */
const now = Date.UTC(2026, 10, 24, 19) / 1000;

interface SiteLog {
  visits: VisitTable;
  from: number;
  calendar: CalendarDay[];
  gaps: ExposureGap[];
}

/** Visits of the larger demo site over some years, in columns. Three years hold about 285,000; `times` copies them to more. */
function siteLog(years: number, times = 1): SiteLog {
  const from = Date.UTC(2026 - years, 10, 24) / 1000;
  const rows = makeVisitLog({ site, from, to: now, seed: demoSeed });
  const place = new Map(site.areas.map((area, index) => [area.id, index]));
  const length = Math.round(rows.length * times);
  const pick = (index: number) => rows[index % rows.length];
  const column = (value: (row: (typeof rows)[number]) => number | null) =>
    Float64Array.from({ length }, (_, index) => value(pick(index)) ?? NaN);
  return {
    from,
    visits: {
      length,
      area: Uint8Array.from({ length }, (_, index) => place.get(pick(index).areaId) ?? 0),
      arrivalAt: column((row) => row.arrivalAt),
      bedSpaceAt: column((row) => row.bedSpaceAt),
      admissionDecisionAt: column((row) => row.admissionDecisionAt),
      departureAt: column((row) => row.departureAt),
      disposition: Uint8Array.from({ length }, (_, index) => {
        const { disposition } = pick(index);
        return disposition === null ? 255 : dispositionCode[disposition];
      }),
      byAmbulance: Uint8Array.from({ length }, (_, index) => (pick(index).byAmbulance ? 1 : 0)),
    },
    calendar: calendarDays(site.id, localDate(from), localDate(now + 366 * day)),
    gaps: outages(site.id, zone, from, now).map((gap) => ({ area: null, ...gap })),
  };
}

function fitSite({ visits, from, calendar, gaps }: SiteLog): OutlookModel {
  const counts = countHourly(visits, site.areas.length, zone, from, now, gaps);
  return {
    arrival: fitArrivals({ counts, calendar: calendar.filter((entry) => entry.date <= localDate(now)) }),
    stay: fitStays({
      visits,
      areas: site.areas.length,
      zone,
      window: { from, to: now },
      facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' },
      gaps,
      calendar,
    }),
    calendar,
  };
}

let fitted: OutlookModel | null = null;
function demoModel(): OutlookModel {
  fitted ??= fitSite(siteLog(1.5));
  return fitted;
}

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
 * Speeds of the need simulation as it is shipped: the built files in a thread of their own, as the server has them. Run
 * through tsx, whose output V8 compiles worse, the same code is a seventh slower.
 */
async function needSpeeds(runs: number): Promise<NeedSpeed[]> {
  const from = new URL('../../dist/shared/forecasting/', import.meta.url).href;
  const workerData = { from, model: demoModel(), input: outlookInput(10_000) };
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

function outlookInput(replications: number): OutlookInput {
  return {
    issuedAt: now,
    timeZone: site.timeZone,
    hours: Array.from({ length: 36 }, (_, index) => now + (index + 1) * hour),
    areas: site.areas.map((area, index) => ({
      areaId: area.id,
      census: {
        takenAt: now - 1200,
        present: [3, 24, 12, 6, 8][index],
        waiting: index === 1 ? 4 : 0,
        boarding: [1, 7, 0, 0, 2][index],
      },
      staffedBeds: [{ at: now, beds: site.plan[index].halfHours[38] }],
      spaces: area.spaces,
      safeMinimum: area.safeMinimum,
      bedStep: area.bedStep,
      alertLimit: area.alertLimit,
    })),
    undecided: { takenAt: now - 1200, waiting: 3 },
    planningRisk: 0.1,
    shifts: [
      { name: 'Late', from: now - 5 * hour, to: now + 2.5 * hour },
      { name: 'Night', from: now + 2 * hour, to: now + 12.5 * hour },
      { name: 'Early', from: now + 12 * hour, to: now + 19.5 * hour },
    ],
    arrivalsSince: null,
    seed: 7,
    replications,
  };
}

/** A week of one department with sixty beds, 11 arrivals an hour on average, stays of 4.5 h in a bed space. */
function waitingPlan(): WaitingPlan {
  const segments = 168;
  return {
    seed: 3,
    segmentAt: Float64Array.from({ length: segments + 1 }, (_, k) => k),
    ratePerHour: Float64Array.from({ length: segments }, (_, k) => 11 + 5 * Math.sin(((k - 9) * Math.PI) / 12)),
    beds: new Int32Array(segments).fill(60),
    steps: Float64Array.of(1),
    hazardPerHour: [new Float64Array(segments).fill(1 / 4.5)],
    impatiencePerHour: 0,
    redraw: null,
    inBedSpaces: [40],
    waiting: 0,
    highest: 400,
    waitLimitHours: 1,
  };
}

export const engineBenches: Bench[] = [
  {
    name: 'need simulation',
    run: async () => {
      const speeds = await needSpeeds(8);
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
          milliseconds(() => issueOutlook(demoModel(), outlookInput(10_000))),
        ),
      ];
    },
  },
  {
    name: 'waiting simulation',
    run: async () => [
      await measure(
        {
          name: 'waiting simulation, M_t/M/60 over a week, one core',
          unit: 'million patients/s',
          better: 'higher',
          goal: 5.5,
        },
        () => {
          const startedAt = performance.now();
          const part = simulateWaitingPart(waitingPlan(), 0, 1000);
          return part.patients / (performance.now() - startedAt) / 1000;
        },
      ),
    ],
  },
  {
    name: 'exact methods',
    run: async () => {
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
  {
    name: 'fit',
    run: async () => {
      const log = siteLog(3, 450_000 / 285_000);
      return [
        await measure(
          {
            name: `fit of three years, ${String(log.visits.length)} visits, 5 areas, 20 streams`,
            unit: 's',
            better: 'lower',
            goal: 5,
          },
          async () => (await milliseconds(() => fitSite(log))) / 1000,
          3,
        ),
      ];
    },
  },
  ...whatIfBenches(demoModel, now),
  {
    name: 'backtest',
    run: async () => {
      const log = siteLog(3, 450_000 / 285_000);
      const counts = countHourly(log.visits, site.areas.length, zone, log.from, now, log.gaps);
      return [
        await measure(
          { name: 'backtest of 52 weeks, arrivals at every level', unit: 's', better: 'lower', goal: 60 },
          async () => (await milliseconds(() => evaluateArrivals(counts, log.calendar))) / 1000,
          1,
        ),
      ];
    },
  },
];
