import { hourOfWeek, hoursOfWeek } from '../domain/hour-of-week.ts';
import {
  conditionalUniformTest,
  lewisTest,
  logTest,
  pooledDispersionTest,
  unround,
} from '../stochastic/arrival-process-tests.ts';
import { makeStream } from '../stochastic/random.ts';
import type { ArrivalModel, HourlyCounts } from './arrival-model.ts';
import { expectHourly } from './block-series.ts';
import { indexCalendar } from './calendar-effect.ts';
import { levelsByDay } from './levels-by-day.ts';

/** One finding: an effect size and what it means for the reader. With many rows every test rejects, so no p-values. */
export interface ArrivalFinding {
  name: string;
  size: string;
  meaning: string;
  concern: boolean;
}

export interface ArrivalDiagnostics {
  /** Variance over mean of counts of the same hour of week; 1 is Poisson. */
  hourDispersion: number;
  /** Variance over expected of day totals about the fitted level; 1 is Poisson. */
  dayDispersion: number;
  /** Coefficient of variation of the site's factor. */
  sharedCv: number;
  /** Correlation of the standardised gaps between counted and expected, hours 1 apart and days 1 and 7 apart. */
  hourCorrelation: number;
  dayCorrelation: number;
  weekCorrelation: number;
  /** Kolmogorov–Smirnov distances from a process that is Poisson within each hour; null without arrival times. */
  withinHour: { conditionalUniform: number; lewis: number; log: number; minutesRounded: number } | null;
  findings: ArrivalFinding[];
}

/** Arrivals tested within hours: more adds nothing to an effect size. */
const mostTimes = 20_000;

/**
 * How well a Poisson process at the model's rates describes the log, as effect sizes in words.
 * @param arrivalTimes instants of arrival, UTC seconds, any order; omitted where only hourly counts are known. Whole-minute
 *   times are un-rounded first, for rounding alone would be rejected (Brown et al. 2005; Kim & Whitt 2014)
 * Cost: linear in hours, n log n in at most 20,000 times.
 */
export function arrivalDiagnostics(
  model: ArrivalModel,
  counts: HourlyCounts,
  arrivalTimes?: Float64Array,
): ArrivalDiagnostics {
  const index = indexCalendar(model.calendar, model.holidayWeekday);
  const hourly = expectHourly(
    counts,
    model.areas.map(({ profile }) => profile.ratePerHour),
    index,
  );
  const dayFactor = levelsByDay(hourly, index, model.effects, model).dayFactor;
  const length = hourly.observed.length;

  const groups: number[][] = Array.from({ length: hoursOfWeek }, () => []);
  const gap = new Float64Array(length);
  const days = length / 24;
  const dayObserved = new Float64Array(days);
  const dayExpected = new Float64Array(days);
  for (let i = 0; i < length; i += 1) {
    const mean = hourly.expected[i] * dayFactor[Math.floor(i / 24)];
    dayObserved[Math.floor(i / 24)] += hourly.observed[i];
    dayExpected[Math.floor(i / 24)] += mean;
    gap[i] = mean > 0 ? (hourly.observed[i] - mean) / Math.sqrt(mean) : NaN;
    if (counts.exposureHours[i] === 1 && mean > 0)
      groups[hourOfWeek(counts.firstLocalHour + i)].push(hourly.observed[i]);
  }
  const usable = groups.filter((group) => group.length >= 2 && group.some((n) => n > 0));
  const hourDispersion = usable.length > 0 ? pooledDispersionTest(usable).index : 1;
  const dayGap = dayExpected.map((mean, d) => (mean > 0 ? (dayObserved[d] - mean) / Math.sqrt(mean) : NaN));
  const dayDispersion = meanOf(dayGap.map((value) => value * value)) ?? 1;
  const figures = {
    hourDispersion,
    dayDispersion,
    sharedCv: Math.sqrt(Math.expm1(model.factorVariance)),
    hourCorrelation: correlationAt(gap, 1),
    dayCorrelation: correlationAt(dayGap, 1),
    weekCorrelation: correlationAt(dayGap, 7),
    withinHour: arrivalTimes && arrivalTimes.length >= 100 ? withinHours(arrivalTimes) : null,
  };
  return { ...figures, findings: findingsOf(figures, model, meanOf(dayExpected) ?? 0) };
}

function findingsOf(
  d: Omit<ArrivalDiagnostics, 'findings'>,
  model: ArrivalModel,
  meanPerDay: number,
): ArrivalFinding[] {
  const percent = (share: number): string => `${(100 * share).toFixed(share < 0.1 ? 1 : 0)} %`;
  const findings: ArrivalFinding[] = [
    {
      name: 'Spread of hourly counts',
      size: `${d.hourDispersion.toFixed(2)} times Poisson`,
      meaning:
        d.hourDispersion < 1.2
          ? 'Arrivals of the same hour of the week vary hardly more than chance: hourly intervals can be trusted.'
          : 'The same hour of the week varies more than chance: look for a change of opening hours, an outage or batches of arrivals written at one time.',
      concern: d.hourDispersion >= 1.5,
    },
    {
      name: 'Day-to-day variation',
      size: `${percent(d.sharedCv)} of the rate, days spread ${d.dayDispersion.toFixed(2)} times Poisson`,
      meaning: `Busy and quiet days differ by about ± ${Math.round(d.sharedCv * meanPerDay)} arrivals beyond chance; the model carries it (${model.structure}).`,
      concern: d.dayDispersion > 4,
    },
    {
      name: 'What one hour tells of the next',
      size: `correlation ${d.hourCorrelation.toFixed(2)}`,
      meaning:
        Math.abs(d.hourCorrelation) < 0.1
          ? 'Beyond the usual rate an hour says little of the next: what is left is chance.'
          : 'A busy hour is followed by another more often than the rates explain: arrivals counted so far will move tonight’s forecast.',
      concern: Math.abs(d.hourCorrelation) >= 0.25,
    },
    {
      name: 'What one day tells of the next',
      size: `correlation ${d.dayCorrelation.toFixed(2)} after one day, ${d.weekCorrelation.toFixed(2)} after a week`,
      meaning:
        Math.abs(d.weekCorrelation) < 0.15
          ? 'No weekly pattern is left over.'
          : 'A weekly pattern is left over: the shape of the week may have changed during the log.',
      concern: Math.abs(d.weekCorrelation) >= 0.3,
    },
  ];
  if (d.withinHour) {
    const { conditionalUniform, lewis, log, minutesRounded } = d.withinHour;
    const worst = Math.max(conditionalUniform, lewis, log);
    findings.push({
      name: 'Arrivals within the hour',
      size: `${percent(worst)} off a Poisson process at most`,
      meaning:
        (worst < 0.05
          ? 'Within an hour arrivals fall as by chance, one by one.'
          : 'Within an hour arrivals come in clumps or at set times: check how arrival times are written down.') +
        (minutesRounded > 0.99 ? ' Times are whole minutes; that rounding was undone first.' : ''),
      concern: worst >= 0.1,
    });
  }
  return findings;
}

/** The latest times, as three distances between what a Poisson process within each hour gives and what is there. */
function withinHours(arrivalTimes: Float64Array): NonNullable<ArrivalDiagnostics['withinHour']> {
  const sorted = arrivalTimes.filter((time) => Number.isFinite(time)).sort();
  const times = sorted.subarray(Math.max(0, sorted.length - mostTimes));
  const whole = times.reduce((n, time) => n + (time % 60 === 0 ? 1 : 0), 0) / times.length;
  const used = whole > 0.99 ? unround(makeStream(1, 17), times, 60, 'down') : times;
  const from = Math.floor(used[0] / 3600) * 3600;
  const to = (Math.floor(used[used.length - 1] / 3600) + 1) * 3600;
  const breaks = Float64Array.from({ length: (to - from) / 3600 + 1 }, (_, i) => from + 3600 * i);
  return {
    conditionalUniform: conditionalUniformTest(used, breaks).statistic,
    lewis: lewisTest(used, breaks).statistic,
    log: logTest(used, breaks).statistic,
    minutesRounded: whole,
  };
}

function meanOf(values: Float64Array): number | null {
  let sum = 0;
  let n = 0;
  for (const value of values) {
    if (Number.isNaN(value)) continue;
    sum += value;
    n += 1;
  }
  return n > 0 ? sum / n : null;
}

/** Correlation of a series of mean about 0 with itself `lag` later; 0 where it cannot be known. */
function correlationAt(values: Float64Array, lag: number): number {
  let product = 0;
  let pairs = 0;
  for (let i = lag; i < values.length; i += 1) {
    if (Number.isNaN(values[i]) || Number.isNaN(values[i - lag])) continue;
    product += values[i] * values[i - lag];
    pairs += 1;
  }
  const variance = meanOf(values.map((value) => value * value)) ?? 0;
  return pairs > 0 && variance > 0 ? product / pairs / variance : 0;
}
