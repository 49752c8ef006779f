import { bedsAt, staffedBedSteps, type BedStep } from '../../../shared/domain/bed-schedule.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { forecastArrivals } from '../../../shared/forecasting/forecast-arrivals.ts';
import type { VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { weeksInHindsight } from '../../../shared/forecasting/weeks-in-hindsight.ts';
import { coveredSpans } from '../../database/covered-spans.ts';
import { readSiteVisits } from '../../database/read-visits.ts';
import type { SectionFacts, SectionInput } from './brief-section.ts';

const hour = 3600;
const day = 86_400;
/** Weeks looked back at beside the last one: four, and the year that holds them. */
const weeksBack = 52;
const draws = 2000;

/** Adds what the log says of the past weeks, and the arrivals ahead. Reads the database by a connection of its own. Cost: up to a second a site. */
export function addHindsight(databaseFile: string, input: SectionInput, now: number): SectionFacts {
  const { site, lastWeek } = input;
  const zone = makeZone(site.timeZone);
  const weeks = weeksBefore(zone, lastWeek);
  const reach = site.stayCapHours * hour;
  const { table, areaIds, lineage, facts } = readSiteVisits(databaseFile, site.id, weeks[0].from - reach);
  const place = areaIds.map((id) => input.areas.findIndex((area) => area.id === id));
  for (let row = 0; row < table.length; row += 1) table.area[row] = place[table.area[row]];
  const spoken = coveredSpans(lineage, now, reach).map((span) => ({ from: span.from + reach, to: span.to }));
  const takenAt = facts?.takenAt ?? 0;
  const found = weeksInHindsight({
    visits: table,
    weeks,
    areas: input.areas.length,
    spoken,
    stayUntil: (row) =>
      facts?.missingDeparture === 'still present' ? Math.min(takenAt, table.arrivalAt[row] + reach) : NaN,
    staffedAt: staffedOverTime(zone, input, weeks[0].from, lastWeek.to),
    waitLimitMinutes: site.waitLimitMinutes,
  });
  const last = found[found.length - 1];
  const { arrivals, arrivalsRefusal } = arrivalsAhead(zone, input);
  return {
    ...input,
    last,
    fourWeeks: found.slice(-5, -1),
    year: found.slice(0, -1),
    arrivals: arrivals && {
      week: arrivals.week,
      days: arrivals.days.map((each) => ({ ...each, usual: usualArrivals(zone, table, spoken, each.from, now) })),
    },
    arrivalsRefusal,
  };
}

/** The last week and those before it, each of seven local days, ascending. */
function weeksBefore(zone: Zone, lastWeek: { from: number; to: number }): { from: number; to: number }[] {
  const localEnd = zone.toLocal(lastWeek.to);
  const starts = Array.from({ length: weeksBack + 2 }, (_, back) => {
    const local = localEnd - back * 7 * day;
    return zone.fromLocal(local).at(0) ?? local - zone.offsetAt(local - day);
  }).reverse();
  return starts.slice(1).map((to, index) => ({ from: starts[index], to }));
}

/** Staffed beds by the plan in force at each instant; before the first plan, by the first. */
function staffedOverTime(
  zone: Zone,
  { plans, bedChanges, areas }: SectionInput,
  from: number,
  to: number,
): (area: number, at: number) => number | null {
  if (plans.length === 0) return () => null;
  const steps: BedStep[][] = areas.map((_, area) =>
    plans.flatMap(({ savedAt, halfHours }, index) => {
      const start = index === 0 ? from : Math.max(from, savedAt);
      const end = Math.min(to, plans.at(index + 1)?.savedAt ?? to);
      const own = bedChanges.filter((change) => change.area === area);
      return end > start && halfHours[area].length > 0 ? staffedBedSteps(zone, halfHours[area], own, start, end) : [];
    }),
  );
  // Asked in ascending order: the place found last is where the next search begins.
  const places = new Array<number>(areas.length).fill(0);
  return (area, at) => {
    const own = steps[area];
    if (own.length === 0) return null;
    if (own[places[area]].at > at) places[area] = 0;
    while (places[area] + 1 < own.length && own[places[area] + 1].at <= at) places[area] += 1;
    return bedsAt([own[places[area]]], at);
  };
}

function arrivalsAhead(
  zone: Zone,
  { outlook, arrival, nextWeek, refusal }: SectionInput,
): { arrivals: Pick<NonNullable<SectionInput['outlook']>, 'week' | 'days'> | null; arrivalsRefusal: string | null } {
  if (outlook) return { arrivals: outlook, arrivalsRefusal: null };
  if (!arrival) return { arrivals: null, arrivalsRefusal: refusal };
  if (arrival.model.coarse) {
    return {
      arrivals: null,
      arrivalsRefusal: 'With under eight weeks of history arrivals are forecast for 24 hours at most.',
    };
  }
  const { from: fromUtc, to: toUtc } = nextWeek;
  const { model, calendar, seed } = arrival;
  const forecast = forecastArrivals({ model, zone, fromUtc, toUtc, calendar, draws, seed });
  return {
    arrivals: {
      week: forecast.whole.total,
      days: forecast.days.map(({ from, total }) => ({ from, ...total })),
    },
    arrivalsRefusal: null,
  };
}

/** Mean arrivals of a day's weekday over the last four such days that the log covers; null under two of them. */
function usualArrivals(
  zone: Zone,
  table: VisitTable,
  spoken: readonly { from: number; to: number }[],
  dayFrom: number,
  now: number,
): number | null {
  const local = zone.toLocal(dayFrom);
  const days: { from: number; to: number }[] = [];
  for (let back = 1; days.length < 4 && back <= 6; back += 1) {
    const from = zone.fromLocal(local - back * 7 * day).at(0);
    const to = zone.fromLocal(local - (back * 7 - 1) * day).at(0);
    if (from === undefined || to === undefined || to > now) continue;
    if (spoken.some((span) => span.from <= from && to <= span.to)) days.push({ from, to });
  }
  if (days.length < 2) return null;
  let count = 0;
  for (let row = 0; row < table.length; row += 1) {
    const arrival = table.arrivalAt[row];
    if (days.some(({ from, to }) => arrival >= from && arrival < to)) count += 1;
  }
  return count / days.length;
}

/** Seven local days from tomorrow, and the seven that end today at midnight. */
export function weeksAround(zone: Zone, now: number): Pick<SectionInput, 'nextWeek' | 'lastWeek'> {
  const today = Math.floor(zone.toLocal(now) / day);
  const midnight = (days: number) => {
    const local = (today + days) * day;
    return zone.fromLocal(local).at(0) ?? local - zone.offsetAt(local - day);
  };
  return { nextWeek: { from: midnight(1), to: midnight(8) }, lastWeek: { from: midnight(-7), to: midnight(0) } };
}
