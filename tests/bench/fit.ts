import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { localDate } from '../../shared/domain/zoned-time.ts';
import type { ArrivalModel, HourlyCounts } from '../../shared/forecasting/arrival-model.ts';
import { effectPriors, effectsOfDay, indexCalendar } from '../../shared/forecasting/calendar-effect.ts';
import type * as EvaluateArrivals from '../../shared/forecasting/evaluate-arrivals.ts';
import type * as FitArrivals from '../../shared/forecasting/fit-arrivals.ts';
import { hourOfWeek } from '../../shared/domain/hour-of-week.ts';
import { built } from './built.ts';
import { measure, milliseconds, single, type Bench, type Figure } from './measure.ts';
import { glm, isPresent, runScript, statsmodels, type Peer } from './peers/peer.ts';
import { hourlyCounts, makeFit, now, siteLog, type SiteLog } from './site-log.ts';

const visits = 450_000;
const weeks = 52;
const quarterDays = 91.3125;

let kept: SiteLog | null = null;
/** Three years of a site with 450,000 visits. */
function largeLog(): SiteLog {
  kept ??= siteLog(3, visits);
  return kept;
}

/**
 * The counts as the peers read them, added up over hours with the same factors: area, hour of week, quarter and the effects
 * of the calendar that our fit knows (the quarters hold the season). Sums say as much to a Poisson regression as hours do.
 */
function writeCounts(counts: HourlyCounts, { calendar }: SiteLog): string {
  const index = indexCalendar(
    calendar.filter(({ date }) => date <= localDate(now)),
    0,
  );
  const firstDay = counts.firstLocalHour / 24;
  const days = counts.exposureHours.length / 24;
  const keys = effectPriors(index, firstDay, firstDay + days, 0.1)
    .map(({ key }) => key)
    .filter((key) => !key.startsWith('season'));
  const cells = new Map<string, { n: number; exposure: number }>();
  for (let day = 0; day < days; day += 1) {
    const acting = new Map(effectsOfDay(index, firstDay + day));
    const effects = keys.map((key) => acting.get(key) ?? 0).join(',');
    for (let i = day * 24; i < day * 24 + 24; i += 1) {
      const how = hourOfWeek(counts.firstLocalHour + i);
      counts.counts.forEach((own, area) => {
        const factors = [area, how, Math.floor(day / quarterDays), effects].join(',');
        const cell = cells.get(factors) ?? { n: 0, exposure: 0 };
        cell.n += own[i];
        cell.exposure += counts.areaExposure?.[area][i] ?? counts.exposureHours[i];
        cells.set(factors, cell);
      });
    }
  }
  const head = ['area', 'how', 'quarter', ...keys.map((_, i) => `effect${String(i)}`), 'n', 'exposure'].join(',');
  const lines = Array.from(cells, ([factors, { n, exposure }]) => `${factors},${String(n)},${String(exposure)}`);
  return [head, ...lines].join('\n');
}

interface PeerFit {
  version: string;
  seconds: number;
  rates: { area: number; hour: number; logRate: number; error: number }[];
}

function runPeer(peer: Peer, script: string, csv: string): PeerFit {
  const folder = mkdtempSync(join(tmpdir(), 'shoalmark-bench-'));
  try {
    const file = join(folder, 'counts.csv');
    writeFileSync(file, csv);
    const [version, seconds, ...rates] = runScript(peer, script, [file]).trim().split('\n');
    return {
      version: version.split(',')[1],
      seconds: Number(seconds.split(',')[1]),
      rates: rates.map((line) => {
        const [area, hour, logRate, error] = line.split(',').map(Number);
        return { area, hour, logRate, error };
      }),
    };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/**
 * Root mean square difference between our rates by hour of week and area and the peer's, in the peer's standard errors,
 * levels apart (each area's profile about its own mean). Ours are shrunk, so that they differ by less than one error.
 */
export function ratesApart(model: Pick<ArrivalModel, 'areas'>, rates: PeerFit['rates']): number {
  let squares = 0;
  for (const [area, { profile }] of model.areas.entries()) {
    const own = rates.filter((rate) => rate.area === area);
    const weigh = (value: (rate: PeerFit['rates'][number]) => number) => {
      const weight = own.reduce((sum, { error }) => sum + error ** -2, 0);
      return own.reduce((sum, rate) => sum + value(rate) * rate.error ** -2, 0) / weight;
    };
    const apart = (rate: PeerFit['rates'][number]) => Math.log(profile.ratePerHour[rate.hour]) - rate.logRate;
    const level = weigh(apart);
    for (const rate of own) squares += ((apart(rate) - level) / rate.error) ** 2;
  }
  return Math.sqrt(squares / rates.length);
}

async function benchFit(): Promise<Figure[]> {
  const log = largeLog();
  const fit = await makeFit();
  const counts = await hourlyCounts(log);
  const { fitArrivals } = await built<typeof FitArrivals>('forecasting/fit-arrivals');
  const calendar = log.calendar.filter(({ date }) => date <= localDate(now));
  const csv = writeCounts(counts, log);
  const peers = [
    { peer: glm, script: 'fit-glm.R' },
    { peer: statsmodels, script: 'fit-statsmodels.py' },
  ].map(({ peer, script }) => ({ peer, fit: isPresent(peer) ? runPeer(peer, script, csv) : null }));
  const beside = (peer: Peer): Figure['compare'] => {
    const found = peers.find((entry) => entry.peer === peer)?.fit;
    return found ? { name: `${peer.name} ${found.version}, arrivals alone`, value: found.seconds } : null;
  };
  const figures = [
    await measure(
      {
        name: `fit of three years, ${String(log.visits.length)} visits, 5 areas, 20 streams`,
        unit: 's',
        better: 'lower',
        goal: 5,
        goalRatio: 1,
        compare: beside(glm),
      },
      async () => (await milliseconds(() => fit(log))) / 1000,
      3,
    ),
    await measure(
      { name: 'fit of its arrivals alone', unit: 's', better: 'lower', compare: beside(statsmodels) },
      async () => (await milliseconds(() => fitArrivals({ counts, calendar }))) / 1000,
      3,
    ),
  ];
  const model = fitArrivals({ counts, calendar });
  for (const { peer, fit: peerFit } of peers) {
    if (!peerFit) continue;
    figures.push(
      single(
        {
          name: `rates by hour of week and area beside ${peer.name}, root mean square difference`,
          unit: 'standard errors',
          better: 'lower',
          goal: 1,
        },
        ratesApart(model, peerFit.rates),
      ),
    );
  }
  glmSeconds = peers[0].fit?.seconds ?? null;
  return figures;
}

let glmSeconds: number | null = null;

export const fitBenches: Bench[] = [
  { name: 'fit', run: benchFit },
  {
    name: 'backtest',
    run: async () => {
      const log = largeLog();
      const counts = await hourlyCounts(log);
      const { evaluateArrivals } = await built<typeof EvaluateArrivals>('forecasting/evaluate-arrivals');
      // Compiled by the first weeks; a whole run more would only say it again.
      evaluateArrivals(counts, log.calendar, { weeks: 2 });
      const seconds = (await milliseconds(() => evaluateArrivals(counts, log.calendar, { weeks }))) / 1000;
      return [
        single(
          {
            name: `backtest of ${String(weeks)} weeks, arrivals at every level`,
            unit: 's',
            better: 'lower',
            goal: 60,
            compare:
              glmSeconds === null
                ? null
                : {
                    name: `R glm, ${String(weeks)} times its fit (timed once), nothing scored`,
                    value: weeks * glmSeconds,
                  },
          },
          seconds,
        ),
      ];
    },
  },
];
