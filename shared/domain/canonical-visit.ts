import { dispositionCode, dispositions } from './disposition.ts';
import { formatInstant, parseInstant } from './instant.ts';
import { screenHeader } from './screen-header.ts';
import { identifierFault, type FileFault } from './visit-file.ts';
import {
  notRecorded,
  requiredVisitColumns,
  visitColumns,
  type ColumnPlaces,
  type VisitColumn,
  type VisitReading,
  type VisitRow,
} from './visit-row.ts';

/** The header line of the product's own visit log. */
export const canonicalHeader = visitColumns.join(',');

const isVisitColumn = (name: string): name is VisitColumn => (visitColumns as readonly string[]).includes(name);

/**
 * Finds the columns of the product's own visit log, in any order; columns other than the required may
 * be absent, and no other column is let in.
 * @param now UTC seconds, for the screening
 */
export function canonicalPlaces(
  header: readonly string[],
  now: number,
): { places: ColumnPlaces } | { faults: FileFault[]; identifying: boolean } {
  if (header.length === 1 && /[;\t|]/.test(header[0])) {
    const message = 'The columns are not separated by commas. Save the file with commas.';
    return { faults: [{ at: 'header', message }], identifying: false };
  }
  const faults: FileFault[] = [];
  let identifying = false;
  const places = Object.fromEntries(visitColumns.map((column) => [column, -1])) as Record<VisitColumn, number>;
  header.slice(0, 200).forEach((given, index) => {
    const name = given.toLowerCase();
    if (!isVisitColumn(name)) {
      const kind = screenHeader(given, now);
      const at = `column ${String(index + 1)}`;
      if (kind !== null) {
        identifying = true;
        faults.push(identifierFault(at, kind));
      } else if (given === '') faults.push({ at, message: 'It has no name in the header.' });
      else faults.push({ at, message: `It is none of the columns that a visit log has (${visitColumns.join(', ')}).` });
    } else if (places[name] >= 0)
      faults.push({ at: `column ${String(index + 1)}`, message: `The header names ${name} twice.` });
    else places[name] = index;
  });
  if (header.length > 200)
    faults.push({ at: 'header', message: `It has ${String(header.length)} columns; a visit log has 7 at most.` });
  for (const column of requiredVisitColumns) {
    if (places[column] < 0) faults.push({ at: 'header', message: `The column ${column} is missing.` });
  }
  return faults.length > 0 ? { faults, identifying } : { places };
}

const codes = new Map<string, number>(dispositions.map((name) => [name, dispositionCode[name]]));

/**
 * Reads the product's own texts: ISO 8601 instants with Z or an offset, a care area by id or exact
 * name, a disposition by its word, yes or no.
 * @param areas code of each care area by its id and by its name
 */
export function canonicalReading(areas: ReadonlyMap<string, number>): VisitReading {
  return {
    time: (text) => parseInstant(text),
    area: (text) => areas.get(text) ?? -1,
    disposition: (text) => codes.get(text) ?? codes.get(text.toLowerCase()) ?? -1,
    ambulance: (text) => (text === 'yes' ? 1 : text === 'no' ? 0 : -1),
  };
}

const timeText = (at: number) => (Number.isNaN(at) ? '' : formatInstant(at));

/** One line of the product's own visit log, without its end. @param areaId of the visit's care area */
export function canonicalLine(visit: VisitRow, areaId: string): string {
  const disposition = visit.disposition === notRecorded ? '' : dispositions[visit.disposition];
  const ambulance = visit.byAmbulance === notRecorded ? '' : visit.byAmbulance === 1 ? 'yes' : 'no';
  return `${timeText(visit.arrivalAt)},${timeText(visit.bedSpaceAt)},${timeText(visit.admissionDecisionAt)},${timeText(visit.departureAt)},${areaId},${disposition},${ambulance}`;
}
