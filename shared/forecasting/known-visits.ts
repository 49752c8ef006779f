import type { VisitTable } from './visit-table.ts';

/** Visits as they were known at an instant: those arrived, with departures still to come left out. */
export function knownAt(visits: VisitTable, at: number): VisitTable {
  const rows: number[] = [];
  for (let i = 0; i < visits.length; i += 1) if (visits.arrivalAt[i] < at) rows.push(i);
  const pick = (values: Float64Array): Float64Array =>
    Float64Array.from(rows, (i) => (values[i] < at ? values[i] : NaN));
  return {
    length: rows.length,
    area: Uint8Array.from(rows, (i) => visits.area[i]),
    arrivalAt: pick(visits.arrivalAt),
    bedSpaceAt: pick(visits.bedSpaceAt),
    admissionDecisionAt: pick(visits.admissionDecisionAt),
    departureAt: pick(visits.departureAt),
    disposition: Uint8Array.from(rows, (i) => (visits.departureAt[i] < at ? visits.disposition[i] : 255)),
    byAmbulance: Uint8Array.from(rows, (i) => visits.byAmbulance[i]),
  };
}
