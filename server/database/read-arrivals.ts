import type { EntityManager } from 'typeorm';
import { ExposureGapRow } from '../entities/ExposureGapRow.ts';
import type { Site } from '../entities/Site.ts';
import { VisitLog } from '../entities/VisitLog.ts';
import { instantsOfLocalHour } from '../../shared/domain/local-hour-span.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { countingSpans, type Span } from './counting-spans.ts';
import { coveredSpans } from './covered-spans.ts';

/** Arrivals counted in one span; null where no accepted log speaks for the whole of it, never zero. */
export interface CountedSpan {
  from: number;
  to: number;
  count: number | null;
}

/**
 * Arrivals that came within each span, as the site's accepted logs hold them.
 * @param spans ascending, not overlapping, UTC seconds
 * Cost: one look at each visit of the time, by the index on arrivals.
 */
export async function readArrivals(
  read: EntityManager,
  site: Site,
  spans: readonly { from: number; to: number }[],
  now: number,
): Promise<CountedSpan[]> {
  if (spans.length === 0) return [];
  const logs = await read.findBy(VisitLog, { siteId: site.id, status: 'ready' });
  const facts = logs.map((log) => ({ periodFrom: log.periodFrom, periodTo: log.periodTo, facts: log }));
  const covered = coveredSpans(facts, now, site.stayCapHours * 3600);
  // In an outage arrivals were not recorded: how many came is not known.
  const outages = await read.findBy(ExposureGapRow, { siteId: site.id, kind: 'outage' });
  const spoken = (from: number, to: number): boolean =>
    covered.some((span) => span.from <= from && to <= span.to) &&
    !outages.some(({ fromAt, untilAt }) => fromAt < to && from < untilAt);
  const counted: CountedSpan[] = spans.map(({ from, to }) => ({ from, to, count: spoken(from, to) ? 0 : null }));
  const first = spans[0].from;
  const last = spans[spans.length - 1].to;
  const counting = countingSpans(logs);
  await addHourlyCounts(read, site, counted, logs, counting);
  for (const { number, kind } of logs) {
    if (kind === 'hourly counts') continue;
    for (const span of counting.get(number) ?? []) {
      const from = Math.max(span.from, first);
      const to = Math.min(span.to, last);
      if (from >= to) continue;
      const rows = await read.query<{ arrivalAt: number }[]>(
        'SELECT arrivalAt FROM visit WHERE logNumber = ? AND arrivalAt >= ? AND arrivalAt < ? ORDER BY arrivalAt',
        [number, from, to],
      );
      let at = 0;
      for (const { arrivalAt } of rows) {
        while (at < counted.length && counted[at].to <= arrivalAt) at += 1;
        const here = counted.at(at);
        if (here && here.from <= arrivalAt && here.count !== null) here.count += 1;
      }
    }
  }
  return counted;
}

/** Adds what logs of hourly counts hold. A span that cuts an hour of theirs in two is not known. */
async function addHourlyCounts(
  read: EntityManager,
  site: Site,
  counted: CountedSpan[],
  logs: readonly VisitLog[],
  counting: ReadonlyMap<number, readonly Span[]>,
): Promise<void> {
  const counts = logs.filter(({ kind }) => kind === 'hourly counts');
  if (counts.length === 0) return;
  const zone = makeZone(site.timeZone);
  const first = Math.floor(zone.toLocal(counted[0].from) / 3600) - 1;
  const last = Math.floor(zone.toLocal(counted[counted.length - 1].to) / 3600) + 1;
  for (const { number } of counts) {
    const spans = counting.get(number) ?? [];
    const rows = await read.query<{ localHour: number; arrivals: number }[]>(
      'SELECT localHour, SUM(arrivals) AS arrivals FROM hourly_count WHERE logNumber = ? AND localHour BETWEEN ? AND ? GROUP BY localHour ORDER BY localHour',
      [number, first, last],
    );
    let at = 0;
    for (const { localHour, arrivals } of rows) {
      const hour = instantsOfLocalHour(zone, localHour);
      if (!spans.some(({ from, to }) => from <= hour.from && hour.to <= to)) continue;
      while (at < counted.length && counted[at].to <= hour.from) at += 1;
      for (let next = at; next < counted.length && counted[next].from < hour.to; next += 1) {
        const span = counted[next];
        if (span.count === null) continue;
        if (span.from <= hour.from && hour.to <= span.to) span.count += arrivals;
        else span.count = null;
      }
    }
  }
}
