import Papa from 'papaparse';
import type { DemoVisit } from './make-visit-log.ts';

/** The columns of the product's own CSV, in order. */
export const visitCsvHeader = [
  'arrival_at',
  'bed_space_at',
  'admission_decision_at',
  'departure_at',
  'care_area',
  'disposition',
  'arrived_by_ambulance',
] as const;

/**
 * Visits as the product's own CSV (RFC 4180, CRLF): instants in ISO 8601 with Z, empty where there is none, the area by
 * its name. @throws RangeError for a visit whose area is not among those given. Cost: about 1 µs a field.
 */
export function writeVisitCsv(visits: Iterable<DemoVisit>, areas: readonly { id: string; name: string }[]): string {
  const names = new Map(areas.map(({ id, name }) => [id, name]));
  const rows: string[][] = [];
  for (const visit of visits) {
    const area = names.get(visit.areaId);
    if (area === undefined) throw new RangeError(`no care area ${JSON.stringify(visit.areaId)}`);
    rows.push([
      instant(visit.arrivalAt),
      instant(visit.bedSpaceAt),
      instant(visit.admissionDecisionAt),
      instant(visit.departureAt),
      area,
      visit.disposition ?? '',
      visit.byAmbulance ? 'yes' : 'no',
    ]);
  }
  return Papa.unparse({ fields: [...visitCsvHeader], data: rows }, { newline: '\r\n' }) + '\r\n';
}

function instant(seconds: number | null): string {
  return seconds === null ? '' : `${new Date(seconds * 1000).toISOString().slice(0, 19)}Z`;
}
