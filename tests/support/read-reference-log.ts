import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { canonicalPlaces, canonicalReading } from '../../shared/domain/canonical-visit.ts';
import { VisitFileReader } from '../../shared/domain/visit-file.ts';
import type { FileOutcome } from '../../shared/domain/visit-file.ts';
import type { VisitRow } from '../../shared/domain/visit-row.ts';
import type { VisitTable } from '../../shared/forecasting/visit-table.ts';
import { makeRecordParser } from '../../server/features/visit-logs/parse-records.ts';

const folder = new URL('../reference/wrenhythe/', import.meta.url);

/** A JSON file of the reference folder. */
export function readReference(name: string): unknown {
  return JSON.parse(readFileSync(new URL(name, folder), 'utf8'));
}

/** The text of a packed file of the reference folder: `visits.csv.gz` or `raw-export.csv.gz`. */
export function unpackReference(name: string): string {
  return gunzipSync(readFileSync(new URL(name, folder))).toString('utf8');
}

/** Reads a log with the reader that an upload goes through, into columns. @param now UTC seconds */
export function readVisitText(
  text: string,
  areas: readonly string[],
  now: number,
): { outcome: FileOutcome; table: VisitTable } {
  const visits: VisitRow[] = [];
  const reader = new VisitFileReader({
    parse: makeRecordParser(),
    places: (header) => canonicalPlaces(header, now),
    reading: canonicalReading(new Map(areas.map((name, index) => [name, index]))),
    now,
    onVisit: (visit) => visits.push(visit),
  });
  // In pieces, as a stream brings them.
  for (let at = 0; at < text.length; at += 65_536) reader.push(text.slice(at, at + 65_536));
  const outcome = reader.end();
  const times = (key: 'arrivalAt' | 'bedSpaceAt' | 'admissionDecisionAt' | 'departureAt') =>
    Float64Array.from(visits, (visit) => visit[key]);
  return {
    outcome,
    table: {
      length: visits.length,
      area: Uint8Array.from(visits, ({ area }) => area),
      arrivalAt: times('arrivalAt'),
      bedSpaceAt: times('bedSpaceAt'),
      admissionDecisionAt: times('admissionDecisionAt'),
      departureAt: times('departureAt'),
      disposition: Uint8Array.from(visits, ({ disposition }) => disposition),
      byAmbulance: Uint8Array.from(visits, ({ byAmbulance }) => byAmbulance),
    },
  };
}
