import { bedsAt, type BedStep } from '../domain/bed-schedule.ts';
import type { Zone } from '../domain/zoned-time.ts';
import { binSeconds } from './need-plan.ts';
import { presentByHour } from './present-by-hour.ts';
import type { VisitTable } from './visit-table.ts';

interface Span {
  from: number;
  to: number;
}

/** What a log says happened: what forecasts are scored against. Areas are in the visits' own order. */
export interface LogTruth {
  /** True where the log tells who was there throughout: its start and outages lie far enough behind. */
  tells(from: number, to: number): boolean;
  /** True where an outage, not the end of the log, keeps it from telling. */
  unrecorded(from: number, to: number): boolean;
  presentAt(at: number): number[];
  /** Highest need of each area at the ends of every fifth minute from `from` up to but not at `to`, and whether it passed the staffed beds. */
  peaks(from: number, to: number, beds: readonly (readonly BedStep[])[]): { peak: number; short: boolean }[];
  /** Whether each area passed its beds at the end of any fifth minute after `after` and up to `until`. */
  shortWithin(after: number, until: number, beds: readonly (readonly BedStep[])[]): boolean[];
  /** Present by area at a full local hour; null where the log does not tell. */
  atLocalHour(localHour: number): number[] | null;
  /** Arrivals by area on a local day (days since 1970-01-01); null where the log does not tell of all of it. */
  onLocalDay(localDay: number): number[] | null;
  /** Arrivals by area in [from, to); null where the log does not tell of all of it. */
  arrivalsIn(from: number, to: number): number[] | null;
  firstLocalHour: number;
  lastLocalHour: number;
}

/** Who came in an outage is missing from the log until he left; most have within a day. */
const outageShadow = 86_400;

/**
 * Answers what happened from a log, for the time that it tells of.
 * @param spans what accepted logs cover, UTC seconds, ascending; who came before a span is missing for the first `capHours`
 * @param gaps outages, in which nothing was recorded
 */
export function makeLogTruth(input: {
  visits: VisitTable;
  areas: number;
  zone: Zone;
  capHours: number;
  spans: readonly Span[];
  gaps: readonly Span[];
}): LogTruth {
  const { visits, areas, zone, capHours, spans, gaps } = input;
  const present = presentByHour(visits, areas, capHours);
  const known = spans
    .map(({ from, to }) => ({ from: from + capHours * 3600, to }))
    .filter((span) => span.to > span.from);
  const inGap = (from: number, to: number, shadow: number): boolean =>
    gaps.some((gap) => from < gap.to + shadow && to >= gap.from);
  const covered = (from: number, to: number): boolean => known.some((span) => span.from <= from && to < span.to);
  const tells = (from: number, to: number): boolean => covered(from, to) && !inGap(from, to, outageShadow);
  const instants = (from: number, to: number): number[] => {
    const list: number[] = [];
    for (let at = Math.ceil(from / binSeconds) * binSeconds; at < to; at += binSeconds) list.push(at);
    return list;
  };

  const firstAt = known.at(0)?.from ?? 0;
  const lastAt = known.at(-1)?.to ?? 0;
  const hours = new Map<number, number[] | null>();
  const days = countDays(visits, areas, zone);
  let arrivals: Float64Array[] | undefined;
  return {
    tells,
    unrecorded: (from, to) => covered(from, to) && inGap(from, to, outageShadow),
    presentAt: (at) => present.presentAt(at),
    peaks(from, to, beds) {
      const found = Array.from({ length: areas }, () => ({ peak: 0, short: false }));
      for (const at of instants(from, to)) {
        present.presentAt(at).forEach((n, a) => {
          found[a].peak = Math.max(found[a].peak, n);
          if (beds[a].length > 0 && n > bedsAt(beds[a], at)) found[a].short = true;
        });
      }
      return found;
    },
    shortWithin(after, until, beds) {
      const short = new Array<boolean>(areas).fill(false);
      for (const at of instants(after + 1, until + 1)) {
        present.presentAt(at).forEach((n, a) => {
          if (beds[a].length > 0 && n > bedsAt(beds[a], at)) short[a] = true;
        });
      }
      return short;
    },
    atLocalHour(localHour) {
      const kept = hours.get(localHour);
      if (kept !== undefined) return kept;
      const at = zone.fromLocal(localHour * 3600).at(0);
      const there = at !== undefined && tells(at, at) ? present.presentAt(at) : null;
      hours.set(localHour, there);
      return there;
    },
    onLocalDay(localDay) {
      const from = zone.fromLocal(localDay * 86_400).at(0);
      const to = zone.fromLocal((localDay + 1) * 86_400).at(0);
      if (from === undefined || to === undefined) return null;
      // Arrivals are told from the first hour of a log on.
      if (!spans.some((span) => span.from <= from && to <= span.to) || inGap(from, to - 1, 0)) return null;
      return days.get(localDay) ?? new Array<number>(areas).fill(0);
    },
    arrivalsIn(from, to) {
      if (!spans.some((span) => span.from <= from && to <= span.to) || inGap(from, to - 1, 0)) return null;
      arrivals ??= sortedArrivals(visits, areas);
      return arrivals.map((own) => firstAtOrAfter(own, to) - firstAtOrAfter(own, from));
    },
    firstLocalHour: Math.ceil(zone.toLocal(firstAt) / 3600),
    lastLocalHour: Math.floor(zone.toLocal(lastAt) / 3600),
  };
}

function countDays(visits: VisitTable, areas: number, zone: Zone): Map<number, number[]> {
  const days = new Map<number, number[]>();
  for (let i = 0; i < visits.length; i += 1) {
    const day = Math.floor(zone.toLocal(visits.arrivalAt[i]) / 86_400);
    const counts = days.get(day) ?? new Array<number>(areas).fill(0);
    counts[visits.area[i]] += 1;
    days.set(day, counts);
  }
  return days;
}

/** Arrival times of each area, ascending. */
function sortedArrivals(visits: VisitTable, areas: number): Float64Array[] {
  const own = Array.from({ length: areas }, (): number[] => []);
  for (let i = 0; i < visits.length; i += 1) own[visits.area[i]].push(visits.arrivalAt[i]);
  return own.map((times) => Float64Array.from(times).sort());
}

function firstAtOrAfter(times: Float64Array, at: number): number {
  let low = 0;
  let high = times.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (times[middle] < at) low = middle + 1;
    else high = middle;
  }
  return low;
}
