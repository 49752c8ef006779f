import {
  countColumns,
  isCountColumn,
  requiredCountColumns,
  type CountColumn,
  type CountPlaces,
  type CountReading,
  type HourlyCount,
} from './hourly-count.ts';
import { daysFromCivil, isCivilDate } from './instant.ts';
import { screenHeader } from './screen-header.ts';
import { identifierFault, type FileFault } from './visit-file.ts';
import { localDate } from './zoned-time.ts';

/** The header line of the product's own file of hourly counts. */
export const canonicalCountHeader = countColumns.join(',');

/** Whether a header is meant to be that of hourly counts: it names the hour and the arrivals, and no arrival time. */
export function isCountHeader(header: readonly string[]): boolean {
  const names = header.map((name) => name.toLowerCase());
  return names.includes('arrivals') && !names.includes('arrival_at');
}

/** Finds the columns of the product's own file of counts, in any order; no other column is let in. @param now UTC seconds, for the screening */
export function canonicalCountPlaces(
  header: readonly string[],
  now: number,
): { countPlaces: CountPlaces } | { faults: FileFault[]; identifying: boolean } {
  const faults: FileFault[] = [];
  let identifying = false;
  const places = Object.fromEntries(countColumns.map((column) => [column, -1])) as Record<CountColumn, number>;
  header.slice(0, 200).forEach((given, index) => {
    const name = given.toLowerCase();
    const at = `column ${String(index + 1)}`;
    if (isCountColumn(name)) {
      if (places[name] >= 0) faults.push({ at, message: `The header names ${name} twice.` });
      else places[name] = index;
      return;
    }
    const kind = screenHeader(given, now);
    if (kind !== null) {
      identifying = true;
      faults.push(identifierFault(at, kind));
    } else if (given === '') faults.push({ at, message: 'It has no name in the header.' });
    else {
      faults.push({ at, message: `It is none of the columns that hourly counts have (${countColumns.join(', ')}).` });
    }
  });
  for (const column of requiredCountColumns) {
    if (places[column] < 0) faults.push({ at: 'header', message: `The column ${column} is missing.` });
  }
  return faults.length > 0 ? { faults, identifying } : { countPlaces: places };
}

const isoDate = /^(\d{4})-(\d{2})-(\d{2})$/;
const plainHour = /^\d{1,2}$/;

/** Reads the product's own texts: a date as YYYY-MM-DD, an hour as 0 to 23, a care area by id or exact name. */
export function canonicalCountReading(areas: ReadonlyMap<string, number>): CountReading {
  return {
    area: (text) => areas.get(text) ?? -1,
    day(text) {
      const found = isoDate.exec(text);
      if (!found) return NaN;
      const [year, month, day] = [Number(found[1]), Number(found[2]), Number(found[3])];
      return isCivilDate(year, month, day) ? daysFromCivil(year, month, day) : NaN;
    },
    hour: (text) => (plainHour.test(text) && Number(text) <= 23 ? Number(text) : NaN),
  };
}

/** One line of the product's own file of counts, without its end. @param areaId of the count's care area */
export function canonicalCountLine(count: HourlyCount, areaId: string): string {
  const hour = ((count.localHour % 24) + 24) % 24;
  return `${areaId},${localDate(count.localHour * 3600)},${String(hour)},${String(count.arrivals)},${count.departures === null ? '' : String(count.departures)}`;
}
