import SqliteDatabase from 'better-sqlite3';
import type { ExtractFacts, VisitTable } from '../../shared/forecasting/visit-table.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import type { CountedHours } from '../../shared/forecasting/counted-hours.ts';
import { countingSpans } from './counting-spans.ts';
import { loadHourlyCounts, statedMeans } from './load-hourly-counts.ts';

/** A log that visits were read from. */
export interface VisitLineage {
  logId: string;
  fileName: string;
  sha256: string;
  /** Rows that count and were read. */
  rows: number;
  periodFrom: number;
  periodTo: number;
  facts: ExtractFacts;
}

export interface SiteVisits {
  table: VisitTable;
  /** Care areas in the site's order; `table.area` indexes it. */
  areaIds: string[];
  /** Newest log first. */
  lineage: VisitLineage[];
  /**
   * What holds of all logs together, for a fit: "departed" and "unknown" if any log says so, and the
   * time of the newest extract.
   */
  facts: ExtractFacts | null;
  /** Logs of hourly counts, which tell of arrivals where no visits do; visits above are never made of them. */
  hourly: {
    counted: CountedHours;
    lineage: VisitLineage[];
    /** Mean stays that the logs state, by place of the area. */
    stated: Map<number, { meanHours: number; source: string }>;
  };
}

interface LogRow {
  id: string;
  number: number;
  kind: 'visits' | 'hourly counts';
  statedStays: string | null;
  fileName: string;
  sha256: string;
  rows: number;
  periodFrom: number;
  periodTo: number;
  selectedBy: ExtractFacts['selectedBy'];
  takenAt: number;
  missingDeparture: ExtractFacts['missingDeparture'];
}

type VisitFields = [
  area: number,
  arrivalAt: number,
  bedSpaceAt: number | null,
  admissionDecisionAt: number | null,
  departureAt: number | null,
  disposition: number | null,
  byAmbulance: number | null,
];

/**
 * Loads the visits of a site that count, into columns: of ready logs, and only those that no newer
 * ready log's period holds. Opens its own read-only connection, so that a worker thread can call it.
 * @param arrivedFrom only visits that arrived at or after it, UTC seconds
 * @param logIds only these logs, as if there were no others; null: all
 * Cost: about 1.5 s and 44 MB for a million visits.
 */
export function readSiteVisits(
  databaseFile: string,
  siteId: string,
  arrivedFrom = -Infinity,
  logIds: readonly string[] | null = null,
): SiteVisits {
  const db = new SqliteDatabase(databaseFile, { readonly: true, fileMustExist: true, timeout: 5000 });
  try {
    db.pragma('cache_size = -32000');
    // One transaction, so that logs and visits are of the same moment.
    return db.transaction(() => load(db, siteId, arrivedFrom, logIds))();
  } finally {
    db.close();
  }
}

function load(
  db: SqliteDatabase.Database,
  siteId: string,
  arrivedFrom: number,
  logIds: readonly string[] | null,
): SiteVisits {
  const areas = db
    .prepare('SELECT "id", "code" FROM "care_area" WHERE "siteId" = ? ORDER BY "position"')
    .all(siteId) as { id: string; code: number }[];
  const indexOfCode = new Map(areas.map((area, index) => [area.code, index]));
  const ready = db
    .prepare(
      'SELECT "id", "number", "kind", "statedStays", "fileName", "sha256", "rows", "periodFrom", "periodTo", "selectedBy", "takenAt", "missingDeparture" FROM "visit_log" WHERE "siteId" = ? AND "status" = \'ready\' ORDER BY "number" DESC',
    )
    .all(siteId) as LogRow[];
  const chosen = logIds === null ? ready : ready.filter(({ id }) => logIds.includes(id));
  const spans = countingSpans(chosen);
  const logs = chosen.filter(({ kind }) => kind === 'visits');
  const table = emptyTable(logs.reduce((sum, log) => sum + log.rows, 0));
  const lineage: VisitLineage[] = [];
  const read = db
    .prepare(
      'SELECT "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance" FROM "visit" WHERE "logNumber" = ? AND "arrivalAt" >= ? AND "arrivalAt" < ?',
    )
    .raw(true);
  for (const log of logs) {
    const before = table.length;
    for (const span of spans.get(log.number) ?? []) {
      const from = Math.max(span.from, arrivedFrom);
      if (from >= span.to) continue;
      for (const fields of read.iterate(log.number, from, span.to) as IterableIterator<VisitFields>) {
        const area = indexOfCode.get(fields[0]);
        if (area === undefined) continue;
        const at = table.length;
        table.area[at] = area;
        table.arrivalAt[at] = fields[1];
        table.bedSpaceAt[at] = fields[2] ?? NaN;
        table.admissionDecisionAt[at] = fields[3] ?? NaN;
        table.departureAt[at] = fields[4] ?? NaN;
        table.disposition[at] = fields[5] ?? 255;
        table.byAmbulance[at] = fields[6] ?? 255;
        table.length += 1;
      }
    }
    const rows = table.length - before;
    if (rows === 0) continue;
    lineage.push(lineageOf(log, rows));
  }
  const counts = chosen.filter(({ kind }) => kind === 'hourly counts');
  const { timeZone } = db.prepare('SELECT "timeZone" FROM "site" WHERE "id" = ?').get(siteId) as { timeZone: string };
  const { counted, rowsOf } = loadHourlyCounts(
    db,
    counts,
    ({ number }) =>
      (spans.get(number) ?? [])
        .map((span) => ({ from: Math.max(span.from, arrivedFrom), to: span.to }))
        .filter((span) => span.to > span.from),
    indexOfCode,
    makeZone(timeZone),
  );
  return {
    table: cut(table),
    areaIds: areas.map((area) => area.id),
    lineage,
    facts: together(lineage),
    hourly: {
      counted,
      lineage: counts.flatMap((log) => {
        const rows = rowsOf.get(log.number);
        return rows === undefined ? [] : [lineageOf(log, rows)];
      }),
      stated: statedMeans(counts, indexOfCode),
    },
  };
}

function lineageOf(log: LogRow, rows: number): VisitLineage {
  const { id: logId, fileName, sha256, periodFrom, periodTo, selectedBy, takenAt, missingDeparture } = log;
  return { logId, fileName, sha256, rows, periodFrom, periodTo, facts: { selectedBy, takenAt, missingDeparture } };
}

function together(lineage: readonly VisitLineage[]): ExtractFacts | null {
  if (lineage.length === 0) return null;
  return {
    selectedBy: lineage.some((log) => log.facts.selectedBy === 'departed') ? 'departed' : 'arrived',
    takenAt: Math.max(...lineage.map((log) => log.facts.takenAt)),
    missingDeparture: lineage.some((log) => log.facts.missingDeparture === 'unknown') ? 'unknown' : 'still present',
  };
}

function emptyTable(rows: number): VisitTable {
  return {
    length: 0,
    area: new Uint8Array(rows),
    arrivalAt: new Float64Array(rows),
    bedSpaceAt: new Float64Array(rows),
    admissionDecisionAt: new Float64Array(rows),
    departureAt: new Float64Array(rows),
    disposition: new Uint8Array(rows),
    byAmbulance: new Uint8Array(rows),
  };
}

function cut(table: VisitTable): VisitTable {
  const { length } = table;
  if (length === table.area.length) return table;
  return {
    length,
    area: table.area.slice(0, length),
    arrivalAt: table.arrivalAt.slice(0, length),
    bedSpaceAt: table.bedSpaceAt.slice(0, length),
    admissionDecisionAt: table.admissionDecisionAt.slice(0, length),
    departureAt: table.departureAt.slice(0, length),
    disposition: table.disposition.slice(0, length),
    byAmbulance: table.byAmbulance.slice(0, length),
  };
}
