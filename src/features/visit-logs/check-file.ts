import { canonicalHeader, canonicalLine } from '../../../shared/domain/canonical-visit.ts';
import { canonicalCountHeader, canonicalCountLine } from '../../../shared/domain/canonical-count.ts';
import { countColumns, type CountColumn, type HourlyCount } from '../../../shared/domain/hourly-count.ts';
import type { TimeSpan } from '../../../shared/domain/file-study.ts';
import { parseInstant } from '../../../shared/domain/instant.ts';
import { readLocalTime, type DateOrder } from '../../../shared/domain/local-time.ts';
import { VisitFileReader, type FileOutcome } from '../../../shared/domain/visit-file.ts';
import { visitColumns, type VisitColumn, type VisitReading } from '../../../shared/domain/visit-row.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { countReading, type CountMapping } from './count-mapping.ts';
import { makeRecordParser } from './parse-records.ts';
import { readSource } from './read-source.ts';
import type { FileSurvey } from './survey-file.ts';

/** How a local time that came twice in an autumn night is read. */
export type RepeatedHour = 'refuse' | 'earlier' | 'later';

/** Everything the person decided about how the file is read. */
export interface FileMapping {
  /** Index of the file's column; null where there is none. */
  columns: Record<VisitColumn, number | null>;
  dateOrders: Record<VisitColumn, DateOrder>;
  /** The answer to the question about dates that no column tells; null while not answered. */
  statedOrder: DateOrder | null;
  repeatedHour: RepeatedHour;
  /** Each value of the care area column to the id of an area; null leaves its rows out. */
  areas: Record<string, string | null>;
  /** Each value to its code, 255 for not recorded; null leaves its rows out. */
  dispositions: Record<string, number | null>;
  ambulances: Record<string, number | null>;
  /** Set where the file holds hourly counts; what stands above is then of no account. */
  counts?: CountMapping | null;
}

export interface CheckSettings {
  survey: FileSurvey;
  mapping: FileMapping;
  areaIds: readonly string[];
  /** Names of the areas, in the same order, for what is said of hourly counts. */
  areaNames?: readonly string[];
  timeZone: string;
  /** Ends of the site's shifts, minutes of the local day. */
  shiftEnds: readonly number[];
  /** What loaded logs cover already. */
  covered: readonly TimeSpan[];
  /** UTC seconds. */
  now: number;
}

/** Area codes of the outcome's report index `areaIds`. The payload is the good rows as gzipped CSV, all that will be sent. */
export interface FileCheck {
  outcome: FileOutcome;
  payload: Blob | null;
}

/**
 * Reads the file as it was mapped, screens and checks every row, and makes what will be sent: the
 * mapped columns of good rows in the product's own form, and nothing else.
 */
export async function checkFile(
  file: Blob,
  settings: CheckSettings,
  onBytes: (bytes: number) => void,
): Promise<FileCheck> {
  const { survey, mapping, areaIds, areaNames = [], timeZone, shiftEnds, covered, now } = settings;
  const packer = new CompressionStream('gzip');
  const payload = new Response(packer.readable).blob();
  const writer = packer.writable.getWriter();
  const encoder = new TextEncoder();
  const counts = mapping.counts ?? null;
  const zone = makeZone(timeZone);
  let lines = [counts ? canonicalCountHeader : canonicalHeader];
  const flush = async () => {
    if (lines.length === 0) return;
    const text = `${lines.join('\n')}\n`;
    lines = [];
    await writer.write(encoder.encode(text));
  };
  const places = Object.fromEntries(visitColumns.map((column) => [column, mapping.columns[column] ?? -1])) as Record<
    VisitColumn,
    number
  >;
  const reader = new VisitFileReader({
    parse: makeRecordParser(survey.form),
    places: () => (counts ? { countPlaces: countPlacesOf(counts) } : { places }),
    reading: makeReading(settings),
    now,
    study: { zone, shiftEnds, covered },
    ...(counts
      ? {
          counts: {
            reading: countReading(survey, counts, areaIds),
            zone,
            missingIsNone: counts.missing === 'none came',
            areaName: (area: number) => areaNames[area] ?? `area ${String(area + 1)}`,
            onCount: (count: HourlyCount) => {
              lines.push(canonicalCountLine(count, areaIds[count.area]));
            },
          },
        }
      : {}),
    onVisit: (visit) => {
      lines.push(canonicalLine(visit, areaIds[visit.area]));
    },
  });
  try {
    await readSource(
      file,
      survey,
      async (text) => {
        const goOn = reader.push(text);
        await flush();
        return goOn;
      },
      onBytes,
    );
  } catch (error) {
    await writer.abort(error);
    await payload.catch(() => undefined);
    throw error;
  }
  const outcome = reader.end();
  await flush();
  await writer.close();
  const packed = await payload;
  // What a refused file would have sent is dropped here.
  return { outcome, payload: outcome.refused === null && outcome.report.goodRows > 0 ? packed : null };
}

function countPlacesOf(counts: CountMapping): Record<CountColumn, number> {
  return Object.fromEntries(countColumns.map((column) => [column, counts.columns[column] ?? -1])) as Record<
    CountColumn,
    number
  >;
}

const quarterHour = 900;

/**
 * Instants of local times, as `zone.fromLocal` tells them, kept by quarter of an hour where there is one
 * only: a log has millions of times within some ten thousand quarters.
 */
function makeLocalReader(zone: Zone): (local: number) => readonly number[] {
  const offsets = new Map<number, number>();
  const single = [0];
  return (local) => {
    const quarter = Math.floor(local / quarterHour);
    let offset = offsets.get(quarter);
    if (offset === undefined) {
      const first = zone.fromLocal(quarter * quarterHour);
      const last = zone.fromLocal((quarter + 1) * quarterHour - 1);
      const isPlain = first.length === 1 && last.length === 1 && last[0] - first[0] === quarterHour - 1;
      offset = isPlain ? quarter * quarterHour - first[0] : NaN;
      offsets.set(quarter, offset);
    }
    if (Number.isNaN(offset)) return zone.fromLocal(local);
    single[0] = local - offset;
    return single;
  };
}

function makeReading({ mapping, areaIds, timeZone }: CheckSettings): VisitReading {
  const fromLocal = makeLocalReader(makeZone(timeZone));
  const areas = new Map(
    Object.entries(mapping.areas).map(([value, id]) => [value, id === null ? -1 : areaIds.indexOf(id)] as const),
  );
  const dispositions = new Map(Object.entries(mapping.dispositions));
  const ambulances = new Map(Object.entries(mapping.ambulances));
  return {
    time(text, column) {
      const instant = parseInstant(text);
      if (!Number.isNaN(instant)) return instant;
      const local = readLocalTime(text, mapping.dateOrders[column]);
      if (Number.isNaN(local)) return NaN;
      const found = fromLocal(local);
      if (found.length === 1) return found[0];
      if (found.length === 0) return 'skipped';
      if (mapping.repeatedHour === 'refuse') return 'repeated';
      return mapping.repeatedHour === 'earlier' ? found[0] : found[found.length - 1];
    },
    area: (text) => areas.get(text) ?? -1,
    disposition: (text) => dispositions.get(text) ?? -1,
    ambulance: (text) => ambulances.get(text) ?? -1,
  };
}
