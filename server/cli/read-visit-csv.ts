import { createReadStream } from 'node:fs';
import { canonicalPlaces, canonicalReading } from '../../shared/domain/canonical-visit.ts';
import { VisitFileReader } from '../../shared/domain/visit-file.ts';
import type { VisitRow } from '../../shared/domain/visit-row.ts';
import type { VisitTable } from '../../shared/forecasting/visit-table.ts';
import { makeRecordParser } from '../features/visit-logs/parse-records.ts';

export interface VisitFile {
  visits: VisitTable;
  /** Care areas in order of first appearance; `visits.area` indexes it. */
  areas: string[];
  cautions: string[];
}

/** Looks like a map of known areas and takes each new name as the next area. */
class AreasAsMet extends Map<string, number> {
  override get(name: string): number | undefined {
    if (name === '') return undefined;
    const known = super.get(name);
    if (known !== undefined) return known;
    if (this.size >= 255) return undefined;
    this.set(name, this.size);
    return this.size - 1;
  }
}

/**
 * Reads a visit log in the product's own form through the reader that uploads go through, with the areas that the file
 * names. Rows with a fault are left out and counted. Throws a RangeError saying why a file is refused.
 * @param now UTC seconds; later times are faults
 */
export async function readVisitCsv(file: string, now: number): Promise<VisitFile> {
  const areas = new AreasAsMet();
  const rows: VisitRow[] = [];
  const reader = new VisitFileReader({
    parse: makeRecordParser(),
    places: (header) => canonicalPlaces(header, now),
    reading: canonicalReading(areas),
    now,
    onVisit: (visit) => {
      rows.push(visit);
    },
  });
  for await (const piece of createReadStream(file, { encoding: 'utf8', highWaterMark: 1 << 20 })) {
    if (!reader.push(piece as string)) break;
  }
  const outcome = reader.end();
  if (outcome.refused !== null) {
    throw new RangeError(outcome.refused.map(({ at, message }) => `${at}: ${message}`).join('\n'));
  }
  const leftOut = outcome.report.rows - rows.length;
  return {
    visits: {
      length: rows.length,
      area: Uint8Array.from(rows, (row) => row.area),
      arrivalAt: Float64Array.from(rows, (row) => row.arrivalAt),
      bedSpaceAt: Float64Array.from(rows, (row) => row.bedSpaceAt),
      admissionDecisionAt: Float64Array.from(rows, (row) => row.admissionDecisionAt),
      departureAt: Float64Array.from(rows, (row) => row.departureAt),
      disposition: Uint8Array.from(rows, (row) => row.disposition),
      byAmbulance: Uint8Array.from(rows, (row) => row.byAmbulance),
    },
    areas: [...areas.keys()],
    cautions: leftOut > 0 ? [`${String(leftOut)} rows with faults were left out.`] : [],
  };
}
