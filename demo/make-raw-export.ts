import Papa from 'papaparse';
import { localParts, makeZone } from '../shared/domain/zoned-time.ts';
import type { Zone } from '../shared/domain/zoned-time.ts';
import { makeStream } from '../shared/stochastic/random.ts';
import type { DemoVisit } from './make-visit-log.ts';

/** Kinds of fault that can be planted in rows. */
export const rawFaults = [
  'departure before arrival',
  'time in the future',
  'unknown area',
  'month before day',
  'no arrival time',
  'not a date',
  'hour that does not exist',
  'row twice',
  'stay over 30 days',
] as const;
export type RawFault = (typeof rawFaults)[number];

/** Columns that no export for planning should hold; their values are invented. */
export type IdentifyingColumn = 'Patient Name' | 'Date of Birth' | 'Record No' | 'Telephone' | 'Postcode';

export interface RawExportOptions {
  timeZone: string;
  areas: readonly { id: string; name: string }[];
  seed: number;
  /** How many rows get each fault, each row at most one. */
  faults?: Partial<Record<RawFault, number>>;
  identifying?: readonly IdentifyingColumn[];
  delimiter?: ',' | ';' | '\t';
  /** Begin with a byte order mark, as spreadsheets do. */
  byteOrderMark?: boolean;
}

export interface RawExport {
  csv: string;
  /** Where each fault stands; the header is line 1. */
  planted: { line: number; fault: RawFault }[];
}

/** The columns that matter, by the names that such a system might give them. */
export const rawHeader = {
  arrivalAt: 'Arrival Date/Time',
  bedSpaceAt: 'Placed Date/Time',
  admissionDecisionAt: 'Decision To Admit',
  departureAt: 'Discharge Date/Time',
  area: 'Unit',
  disposition: 'Discharge Dest',
  byAmbulance: 'Arr By Amb',
} as const;

const destinations = {
  home: 'Home',
  admitted: 'Admitted',
  transferred: 'Transferred',
  'left before treatment': 'Left before treatment',
} as const;

/**
 * Visits as a hospital's patient system might export them: other column names, columns that mean nothing to planning,
 * day-first local times without an offset, area names in any case; with faults planted where asked for.
 * @throws RangeError for a visit of an area not given, or more faults than rows.
 */
export function makeRawExport(visits: readonly DemoVisit[], options: RawExportOptions): RawExport {
  const zone = makeZone(options.timeZone);
  const stream = makeStream(options.seed, 9);
  const pick = (count: number) => Math.floor(stream.uniform() * count);
  const names = new Map(options.areas.map(({ id, name }) => [id, name]));

  const time = (seconds: number | null, monthFirst = false): string => {
    if (seconds === null) return '';
    const { year, month, day, hour, minute } = localParts(zone.toLocal(seconds));
    const two = (n: number) => String(n).padStart(2, '0');
    const date = monthFirst ? `${two(month)}/${two(day)}` : `${two(day)}/${two(month)}`;
    return `${date}/${String(year)} ${two(hour)}:${two(minute)}`;
  };

  const faultOf = placeFaults(visits.length, options.faults ?? {}, pick);
  const rows: Record<string, string>[] = [];
  const planted: RawExport['planted'] = [];
  for (const [index, visit] of visits.entries()) {
    const name = names.get(visit.areaId);
    if (name === undefined) throw new RangeError(`no care area ${JSON.stringify(visit.areaId)}`);
    const row: Record<string, string> = {
      Source: 'ED-LIVE',
      [rawHeader.area]: [name, name.toUpperCase(), name.toLowerCase()][pick(3)],
      [rawHeader.arrivalAt]: time(visit.arrivalAt),
      Desk: String(1 + pick(4)),
      [rawHeader.byAmbulance]: visit.byAmbulance ? 'Y' : 'N',
      [rawHeader.bedSpaceAt]: time(visit.bedSpaceAt),
      [rawHeader.admissionDecisionAt]: time(visit.admissionDecisionAt),
      [rawHeader.departureAt]: time(visit.departureAt),
      [rawHeader.disposition]: visit.disposition === null ? '' : destinations[visit.disposition],
      'Rota Colour': ['blue', 'green', 'white'][pick(3)],
    };
    for (const column of options.identifying ?? []) row[column] = inventedIdentifier(column, pick);
    const fault = faultOf.get(index);
    if (fault !== undefined) {
      plant(fault, row, visit, time, zone);
      planted.push({ line: rows.length + 2, fault });
    }
    rows.push(row);
    if (fault === 'row twice') rows.push({ ...row });
  }
  const csv = Papa.unparse(rows, { delimiter: options.delimiter ?? ',', newline: '\r\n' });
  return { csv: `${options.byteOrderMark === true ? '\uFEFF' : ''}${csv}\r\n`, planted };
}

function placeFaults(
  rows: number,
  faults: Partial<Record<RawFault, number>>,
  pick: (count: number) => number,
): Map<number, RawFault> {
  const placed = new Map<number, RawFault>();
  for (const fault of rawFaults) {
    for (let n = 0; n < (faults[fault] ?? 0); n += 1) {
      if (placed.size >= rows) throw new RangeError('more faults than rows');
      let index = pick(rows);
      while (placed.has(index)) index = (index + 1) % rows;
      placed.set(index, fault);
    }
  }
  return placed;
}

function plant(
  fault: RawFault,
  row: Record<string, string>,
  visit: DemoVisit,
  time: (seconds: number | null, monthFirst?: boolean) => string,
  zone: Zone,
): void {
  const { arrivalAt, areaId } = visit;
  if (fault === 'departure before arrival') row[rawHeader.departureAt] = time(arrivalAt - 3600);
  else if (fault === 'time in the future') row[rawHeader.departureAt] = time(arrivalAt + 3 * 365 * 86_400);
  else if (fault === 'unknown area') row[rawHeader.area] = `Corridor ${areaId.slice(0, 3)}`;
  else if (fault === 'month before day') {
    // The 25th of the month can be read in one order only, so the two orders in one file cannot be reconciled.
    row[rawHeader.arrivalAt] = time(arrivalAt, true).replace(/\/\d{2}\//, '/25/');
  } else if (fault === 'no arrival time') row[rawHeader.arrivalAt] = '';
  else if (fault === 'not a date') row[rawHeader.arrivalAt] = '31/02/2026 10:15';
  else if (fault === 'hour that does not exist') Object.assign(row, aroundSkippedHour(zone, arrivalAt, time));
  else if (fault === 'stay over 30 days') row[rawHeader.arrivalAt] = time(arrivalAt - 45 * 86_400);
}

/** A short visit whose arrival is written half an hour into the hour that the last spring change skipped. */
function aroundSkippedHour(
  zone: Zone,
  before: number,
  time: (seconds: number | null) => string,
): Record<string, string> {
  const change = zone
    .changesBetween(before - 400 * 86_400, before)
    .findLast(({ at, offset }) => offset > zone.offsetAt(at - 1));
  if (!change) throw new RangeError(`${zone.name} skips no hour`);
  // The wall clock just before the change, half an hour on: a label that no instant carries.
  const shown = time(change.at - 60).slice(0, 11);
  const skipped = change.at + zone.offsetAt(change.at - 1) + 1800;
  const { hour, minute } = localParts(skipped);
  return {
    [rawHeader.arrivalAt]: `${shown}${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`,
    [rawHeader.bedSpaceAt]: '',
    [rawHeader.admissionDecisionAt]: '',
    [rawHeader.departureAt]: time(change.at + 3 * 3600),
    [rawHeader.disposition]: destinations.home,
  };
}

const givenNames = ['Odalys', 'Bram', 'Sunniva', 'Tamsin', 'Ruben'];
const familyNames = ['Whitlock', 'Ferrand', 'Okell', 'Marsden', 'Tull'];

function inventedIdentifier(column: IdentifyingColumn, pick: (count: number) => number): string {
  if (column === 'Patient Name') return `${familyNames[pick(5)]}, ${givenNames[pick(5)]}`;
  if (column === 'Date of Birth') return `${String(10 + pick(18))}/0${String(1 + pick(9))}/${String(1930 + pick(85))}`;
  if (column === 'Record No') return `R${String(100_000 + pick(900_000))}`;
  // Ranges kept free for invented use: 01632 960xxx for telephone numbers; no post town has the area ZZ.
  if (column === 'Telephone') return `01632 960${String(pick(1000)).padStart(3, '0')}`;
  return `ZZ${String(1 + pick(9))} ${String(1 + pick(9))}AA`;
}
