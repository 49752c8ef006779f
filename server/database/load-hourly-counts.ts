import type SqliteDatabase from 'better-sqlite3';
import { instantsOfLocalHour } from '../../shared/domain/local-hour-span.ts';
import type { Zone } from '../../shared/domain/zoned-time.ts';
import type { CountedHours } from '../../shared/forecasting/counted-hours.ts';
import type { StatedStays } from '../entities/VisitLog.ts';
import type { Span } from './counting-spans.ts';

/** A log of hourly counts as it is chosen for reading. */
export interface CountLog {
  number: number;
  statedStays: string | null;
}

const none = (): CountedHours => ({
  length: 0,
  area: new Uint8Array(0),
  localHour: new Int32Array(0),
  arrivals: new Int32Array(0),
  departures: new Float64Array(0),
});

/**
 * Hourly counts that count, into columns: local hours that lie whole within the given spans of their log.
 * @param logs newest first. @param indexOfCode place of each care area by its code
 * Cost: linear in the hours read.
 */
export function loadHourlyCounts(
  db: SqliteDatabase.Database,
  logs: readonly CountLog[],
  spansOf: (log: CountLog) => readonly Span[],
  indexOfCode: ReadonlyMap<number, number>,
  zone: Zone,
): { counted: CountedHours; rowsOf: Map<number, number> } {
  const rowsOf = new Map<number, number>();
  if (logs.length === 0) return { counted: none(), rowsOf };
  const found: [area: number, localHour: number, arrivals: number, departures: number | null][] = [];
  const read = db
    .prepare(
      'SELECT "areaCode", "localHour", "arrivals", "departures" FROM "hourly_count" WHERE "logNumber" = ? AND "localHour" BETWEEN ? AND ?',
    )
    .raw(true);
  const hours = new Map<number, Span>();
  const spanOf = (localHour: number): Span => {
    let span = hours.get(localHour);
    if (!span) hours.set(localHour, (span = instantsOfLocalHour(zone, localHour)));
    return span;
  };
  for (const log of logs) {
    const before = found.length;
    for (const span of spansOf(log)) {
      const first = Math.floor(zone.toLocal(span.from) / 3600) - 1;
      const last = Math.floor(zone.toLocal(span.to - 1) / 3600) + 1;
      for (const row of read.iterate(log.number, first, last) as IterableIterator<(typeof found)[number]>) {
        const area = indexOfCode.get(row[0]);
        const hour = spanOf(row[1]);
        if (area === undefined || hour.from < span.from || hour.to > span.to) continue;
        found.push([area, row[1], row[2], row[3]]);
      }
    }
    if (found.length > before) rowsOf.set(log.number, found.length - before);
  }
  return {
    counted: {
      length: found.length,
      area: Uint8Array.from(found, ([area]) => area),
      localHour: Int32Array.from(found, ([, localHour]) => localHour),
      arrivals: Int32Array.from(found, ([, , arrivals]) => arrivals),
      departures: Float64Array.from(found, ([, , , departures]) => departures ?? NaN),
    },
    rowsOf,
  };
}

/** Stated mean stays by place of the area, hours; of several logs the newest that states one. @param logs newest first */
export function statedMeans(
  logs: readonly CountLog[],
  indexOfCode: ReadonlyMap<number, number>,
): Map<number, { meanHours: number; source: string }> {
  const means = new Map<number, { meanHours: number; source: string }>();
  for (const { statedStays } of logs) {
    if (statedStays === null) continue;
    const { source, areas } = JSON.parse(statedStays) as StatedStays;
    for (const { areaCode, meanHours } of areas) {
      const area = indexOfCode.get(areaCode);
      if (area !== undefined && !means.has(area)) means.set(area, { meanHours, source });
    }
  }
  return means;
}
