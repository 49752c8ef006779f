import { instantsOfLocalHour } from '../domain/local-hour-span.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { VisitTable } from './visit-table.ts';

/** Hourly counts in columns, one entry an area and local hour, in any order; `area` indexes the site's list of care areas. */
export interface CountedHours {
  length: number;
  area: Uint8Array;
  /** Local hours from 1970-01-01 00:00 on the wall clock. */
  localHour: Int32Array;
  arrivals: Int32Array;
  /** NaN where the log gives none. */
  departures: Float64Array;
}

/**
 * Visits with one entry more for every arrival of the counts, spread evenly over its local hour, of which nothing but the
 * arrival and the area is known. Good for whatever goes by whole hours; the minutes mean nothing.
 * Cost: linear in visits and counted arrivals.
 */
export function withCountedArrivals(visits: VisitTable, counted: CountedHours, zone: Zone): VisitTable {
  if (counted.length === 0) return visits;
  let arrivals = 0;
  for (let row = 0; row < counted.length; row += 1) arrivals += counted.arrivals[row];
  const length = visits.length + arrivals;
  const floats = (own: Float64Array): Float64Array => {
    const all = new Float64Array(length).fill(NaN);
    all.set(own.subarray(0, visits.length));
    return all;
  };
  const bytes = (own: Uint8Array): Uint8Array => {
    const all = new Uint8Array(length).fill(255);
    all.set(own.subarray(0, visits.length));
    return all;
  };
  const table: VisitTable = {
    length,
    area: bytes(visits.area),
    arrivalAt: floats(visits.arrivalAt),
    bedSpaceAt: floats(visits.bedSpaceAt),
    admissionDecisionAt: floats(visits.admissionDecisionAt),
    departureAt: floats(visits.departureAt),
    disposition: bytes(visits.disposition),
    byAmbulance: bytes(visits.byAmbulance),
  };
  let at = visits.length;
  for (let row = 0; row < counted.length; row += 1) {
    const count = counted.arrivals[row];
    if (count === 0) continue;
    const { from, to } = instantsOfLocalHour(zone, counted.localHour[row]);
    for (let n = 0; n < count; n += 1) {
      table.area[at] = counted.area[row];
      table.arrivalAt[at] = from + Math.floor(((n + 0.5) / count) * (to - from));
      at += 1;
    }
  }
  return table;
}
