import type { Zone } from '../domain/zoned-time.ts';
import type { LiveArrivals } from './arrival-model.ts';
import { forecastArrivals, type ArrivalPercentiles, type SpanForecast } from './forecast-arrivals.ts';
import type { OutlookModel } from './prepare-need.ts';
import type {
  ArrivalTable,
  CountColumns,
  WeekOutlookInput,
  WeekOutlookResult,
  WeekSpan,
} from './week-outlook-types.ts';

/** Joint draws of the rates: percentiles to about a unit in 100. */
const draws = 2000;

/** Columns from one row a span. */
function columnsOf(rows: readonly ArrivalPercentiles[]): CountColumns {
  const column = (key: keyof ArrivalPercentiles): number[] => rows.map((row) => row[key]);
  return {
    mean: column('mean').map((value) => Math.round(value * 1000) / 1000),
    p2_5: column('p2_5'),
    p10: column('p10'),
    p25: column('p25'),
    p50: column('p50'),
    p75: column('p75'),
    p90: column('p90'),
    p97_5: column('p97_5'),
  };
}

function tableOf(spans: readonly SpanForecast[], areas: number): ArrivalTable {
  const carried = spans.flatMap(({ ambulance }) => (ambulance === null ? [] : [ambulance]));
  return {
    spans: spans.map(({ name, from, to }) => ({ name, from, to })),
    total: columnsOf(spans.map(({ total }) => total)),
    areas: Array.from({ length: areas }, (_, a) => columnsOf(spans.map((span) => span.areas[a]))),
    ambulance: carried.length === spans.length && spans.length > 0 ? columnsOf(carried) : null,
  };
}

/**
 * Arrivals of the days ahead by hour, whole shift, day, and seven and fourteen days: every span's percentiles from the
 * joint draws of its own sum of rates, since sums of percentiles are not percentiles of sums.
 */
export function weekArrivals(
  model: OutlookModel,
  input: WeekOutlookInput,
  days: readonly WeekSpan[],
  live: LiveArrivals | null,
  zone: Zone,
): WeekOutlookResult['arrivals'] {
  const whole = days.slice(1);
  const weeks = [7, 14]
    .filter((count) => whole.length >= count)
    .map((count) => ({ name: `${count} days`, from: whole[0].from, to: whole[count - 1].to }));
  const toUtc = input.hours[input.hours.length - 1];
  const shifts = input.shifts.filter(({ from, to }) => from >= input.issuedAt && to <= toUtc);
  const forecast = forecastArrivals({
    model: model.arrival,
    zone,
    fromUtc: input.issuedAt,
    toUtc,
    calendar: model.calendar,
    shifts: [...shifts, ...weeks],
    ...(live ? { live } : {}),
    ambulance: input.ambulance,
    draws: input.arrivalDraws ?? draws,
    seed: input.seed,
  });
  const areas = input.areas.length;
  return {
    hours: tableOf(forecast.hours, areas),
    shifts: tableOf(forecast.shifts.slice(0, shifts.length), areas),
    days: tableOf(
      forecast.days.filter((day) => day.to <= input.daysUntil),
      areas,
    ),
    weeks: tableOf(forecast.shifts.slice(shifts.length), areas),
  };
}
