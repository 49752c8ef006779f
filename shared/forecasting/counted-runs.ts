import { instantsOfLocalHour } from '../domain/local-hour-span.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { CountedHours } from './counted-hours.ts';
import { blockOf } from './stay-clock.ts';
import type { ExposureGap } from './visit-table.ts';

/** Hours in a row whose arrivals and departures are both known. */
export interface CountedRun {
  /** Patients who came and who left within each hour. */
  arrivals: Float64Array;
  departures: Float64Array;
  /** Real hours that each label lasts. */
  hours: Float64Array;
  /** Block of the day of each hour. */
  block: Uint8Array;
  /** Start of each hour, UTC seconds. */
  startAt: Float64Array;
}

/** What the counts of one area say of who was present; `refusal` says why they say nothing. */
export interface AreaRuns {
  area: number;
  arrivals: number;
  runs: CountedRun[];
  /** What the departures of all runs were multiplied by, to balance the arrivals. */
  scale: number;
  refusal: string | null;
}

/** A run is cut after so many hours: departures that were missed now and then would carry its level away. */
const longestRun = 28 * 24;
const shortestRun = 7 * 24;
const leastHours = 28 * 24;
/** Departures may differ from arrivals by this share: they are scaled to balance. */
const mostImbalance = 0.02;
/** Or by so many patients, who may have been there at the start or the end. */
const alwaysBalanced = 20;

/**
 * Runs of hours with arrivals and departures, area by area. Hours that touch a gap end a run.
 * Cost: linear in hours times areas, and in gaps.
 */
export function countedRuns(
  request: { counted: CountedHours; areas: number; zone: Zone; gaps: readonly ExposureGap[] },
  blockHours: number,
  holidays: ReadonlySet<number>,
): AreaRuns[] {
  const { counted, areas, zone, gaps } = request;
  const rowsOf = Array.from({ length: areas }, () => [] as number[]);
  for (let row = 0; row < counted.length; row += 1) rowsOf[counted.area[row]].push(row);
  return rowsOf.map((rows, area) => {
    rows.sort((a, b) => counted.localHour[a] - counted.localHour[b]);
    const arrivals = rows.reduce((sum, row) => sum + counted.arrivals[row], 0);
    const own = gaps.filter((gap) => gap.area === null || gap.area === area);
    const runs: AreaRuns['runs'] = [];
    let current: number[] = [];
    let end = NaN;
    const spans = new Map<number, { from: number; to: number }>();
    const close = (): void => {
      if (current.length >= shortestRun) runs.push(makeRun(current));
      current = [];
    };
    const makeRun = (list: readonly number[]): AreaRuns['runs'][number] => ({
      arrivals: Float64Array.from(list, (row) => counted.arrivals[row]),
      departures: Float64Array.from(list, (row) => counted.departures[row]),
      hours: Float64Array.from(list, (row) => {
        const { from, to } = spans.get(row) ?? { from: 0, to: 3600 };
        return (to - from) / 3600;
      }),
      block: Uint8Array.from(list, (row) => blockOf(counted.localHour[row], blockHours, holidays)),
      startAt: Float64Array.from(list, (row) => spans.get(row)?.from ?? 0),
    });
    for (const row of rows) {
      const span = instantsOfLocalHour(zone, counted.localHour[row]);
      spans.set(row, span);
      const isKnown =
        !Number.isNaN(counted.departures[row]) && !own.some((gap) => gap.from < span.to && span.from < gap.to);
      if (!isKnown || span.from !== end || current.length >= longestRun) close();
      if (isKnown) current.push(row);
      end = span.to;
    }
    close();
    return { area, arrivals, ...balanced(runs, area) };
  });
}

/** Scales the departures of all runs to their arrivals, or says why they cannot be used. */
function balanced(runs: AreaRuns['runs'], area: number): Pick<AreaRuns, 'runs' | 'scale' | 'refusal'> {
  const name = `area ${String(area + 1)}`;
  const hours = runs.reduce((sum, run) => sum + run.arrivals.length, 0);
  if (hours < leastHours) {
    return {
      runs: [],
      scale: 1,
      refusal: `the hourly counts of ${name} hold no departures for four weeks`,
    };
  }
  const total = (pick: (run: CountedRun) => Float64Array): number =>
    runs.reduce((sum, run) => sum + pick(run).reduce((all, n) => all + n, 0), 0);
  const came = total((run) => run.arrivals);
  const left = total((run) => run.departures);
  if (left === 0 || (Math.abs(came - left) > alwaysBalanced && Math.abs(came - left) > mostImbalance * came)) {
    return {
      runs: [],
      scale: 1,
      refusal: `${came.toLocaleString('en')} patients came to ${name} and ${left.toLocaleString('en')} left in the same hours: they do not balance`,
    };
  }
  const scale = came / left;
  return {
    runs: runs.map((run) => ({ ...run, departures: run.departures.map((n) => n * scale) })),
    scale,
    refusal: null,
  };
}

/**
 * Patient-hours within each hour of a run. How many were there at the start is not in the counts; it follows from the mean
 * stay by Little's law (1961): patient-hours = arrivals × mean stay. No hour may end below zero, so the counts can show that
 * stays are longer than was stated; then the least that they allow is taken.
 * @returns patient-hours, and the mean stay that they amount to
 */
export function patientHoursOf(run: CountedRun, meanHours: number): { patientHours: Float64Array; meanHours: number } {
  const { arrivals, departures, hours } = run;
  const net = new Float64Array(arrivals.length);
  let sum = 0;
  let lowest = 0;
  let netHours = 0;
  let lasted = 0;
  let came = 0;
  for (let h = 0; h < net.length; h += 1) {
    const change = arrivals[h] - departures[h];
    net[h] = sum + change / 2;
    sum += change;
    lowest = Math.min(lowest, sum);
    netHours += net[h] * hours[h];
    lasted += hours[h];
    came += arrivals[h];
  }
  const start = Math.max(-lowest, (meanHours * came - netHours) / lasted);
  return {
    patientHours: net.map((own, h) => Math.max(0, start + own) * hours[h]),
    meanHours: came > 0 ? (netHours + start * lasted) / came : meanHours,
  };
}
