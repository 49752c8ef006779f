import Holidays from 'date-holidays';
import type { EntityManager } from 'typeorm';
import { localDate, makeZone } from '../../shared/domain/zoned-time.ts';
import type { CalendarDay } from '../../shared/forecasting/visit-table.ts';
import { CalendarEntry } from '../entities/CalendarEntry.ts';
import type { Site } from '../entities/Site.ts';

const yearsKept = 256;
const years = new Map<string, readonly CalendarDay[]>();

/** Public holidays of one year; working them out takes tens of milliseconds, so they are kept. */
function holidaysOfYear(country: string, region: string | null, year: number): readonly CalendarDay[] {
  const key = `${country} ${region ?? ''} ${String(year)}`;
  const kept = years.get(key);
  if (kept) return kept;
  const calendar = region === null ? new Holidays(country) : new Holidays(country, region);
  const days = new Map<string, CalendarDay>();
  for (const holiday of calendar.getHolidays(year)) {
    const date = holiday.date.slice(0, 10);
    if (holiday.type !== 'public') continue;
    // A substitute day carries the name of the day it stands for.
    const name = holiday.name.replace(/ \(substitute day\)$/, '');
    days.set(date, { date, kind: 'public holiday', name, statedEffect: null });
  }
  const found = [...days.values()];
  if (years.size >= yearsKept) years.delete(years.keys().next().value ?? key);
  years.set(key, found);
  return found;
}

/** Public holidays of a country (and region) with a date in [fromDate, toDate], both YYYY-MM-DD. Observances are left out. */
export function publicHolidays(
  country: string,
  region: string | null,
  fromDate: string,
  toDate: string,
): CalendarDay[] {
  const found: CalendarDay[] = [];
  for (let year = Number(fromDate.slice(0, 4)); year <= Number(toDate.slice(0, 4)); year += 1) {
    for (const day of holidaysOfYear(country, region, year)) {
      if (day.date >= fromDate && day.date <= toDate) found.push({ ...day });
    }
  }
  return found;
}

/** The unusual days of a site between two instants: public holidays and its own events and closures, by date. */
export async function readCalendar(
  read: EntityManager,
  site: Site,
  fromUtc: number,
  toUtc: number,
): Promise<CalendarDay[]> {
  const zone = makeZone(site.timeZone);
  const fromDate = localDate(zone.toLocal(fromUtc));
  const toDate = localDate(zone.toLocal(toUtc));
  const own = await read
    .createQueryBuilder(CalendarEntry, 'entry')
    .where('entry.siteId = :siteId AND entry.date BETWEEN :fromDate AND :toDate', { siteId: site.id, fromDate, toDate })
    .getMany();
  const days: CalendarDay[] = [
    ...publicHolidays(site.country, site.region, fromDate, toDate),
    ...own.map(({ date, kind, name, statedEffect }) => ({ date, kind, name, statedEffect })),
  ];
  return days.sort((a, b) => (a.date < b.date ? -1 : a.date > b.date ? 1 : 0));
}
