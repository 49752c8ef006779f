import Holidays from 'date-holidays';
import type { CalendarDay } from '../shared/forecasting/visit-table.ts';
import { isoWeekday, localDate, localSecondsOf } from '../shared/domain/zoned-time.ts';
import type { Zone } from '../shared/domain/zoned-time.ts';
import { generalId, saltbyId } from './farrowmere-accounts.ts';

export const country = 'GB';
export const region = 'ENG';

/** The one local event of the demo: a fair in the harbour town, each year on the last Saturday of August. */
const fairName = 'Lantern fair';
const fairEffect: Record<string, [low: number, high: number]> = {
  [generalId]: [1.03, 1.15],
  [saltbyId]: [1.3, 1.7],
};

const holidaysByYear = new Map<number, Map<string, string>>();
let calendar: Holidays | undefined;

/** Public holidays of a year: local date → name. Cost: about 10 ms for a year not asked before. */
export function publicHolidays(year: number): Map<string, string> {
  let found = holidaysByYear.get(year);
  if (!found) {
    calendar ??= new Holidays(country, region);
    found = new Map(
      calendar
        .getHolidays(year)
        .filter((day) => day.type === 'public')
        .map((day) => [day.date.slice(0, 10), day.name]),
    );
    holidaysByYear.set(year, found);
  }
  return found;
}

/** Local date of the n-th given ISO weekday of a month (1 to 12); n = −1 is the last one. */
function weekdayOfMonth(year: number, month: number, weekday: number, n: number): string {
  const first = Date.UTC(year, month - 1, 1) / 1000;
  const days: string[] = [];
  for (let at = first; at < Date.UTC(year, month, 1) / 1000; at += 86_400) {
    if (isoWeekday(at) === weekday) days.push(localDate(at));
  }
  return days.at(n < 0 ? n : n - 1) ?? days[0];
}

const fairDates = new Map<number, string>();

/** Date of the fair in a year. */
export function fairDate(year: number): string {
  let date = fairDates.get(year);
  if (date === undefined) {
    date = weekdayOfMonth(year, 8, 6, -1);
    fairDates.set(year, date);
  }
  return date;
}

/** Days of a site that are not ordinary ones, from one local date to another, both included, in order. */
export function calendarDays(siteId: string, fromDate: string, toDate: string): CalendarDay[] {
  const days: CalendarDay[] = [];
  for (let year = Number(fromDate.slice(0, 4)); year <= Number(toDate.slice(0, 4)); year += 1) {
    for (const [date, name] of publicHolidays(year))
      days.push({ date, kind: 'public holiday', name, statedEffect: null });
    days.push({ date: fairDate(year), kind: 'local event', name: fairName, statedEffect: fairEffect[siteId] ?? null });
  }
  return days.filter(({ date }) => date >= fromDate && date <= toDate).sort((a, b) => a.date.localeCompare(b.date));
}

/**
 * Spans in which the patient system of a site wrote nothing, overlapping [from, to), UTC seconds: at Farrowmere General
 * each year the second Wednesday of March, 00:30 to 08:00, an upgrade that took longer than planned.
 */
export function outages(siteId: string, zone: Zone, from: number, to: number): { from: number; to: number }[] {
  if (siteId !== generalId) return [];
  const found: { from: number; to: number }[] = [];
  for (let year = new Date(from * 1000).getUTCFullYear(); year <= new Date(to * 1000).getUTCFullYear(); year += 1) {
    const date = weekdayOfMonth(year, 3, 3, 2);
    const [start] = zone.fromLocal(localSecondsOf(date, 30));
    const [end] = zone.fromLocal(localSecondsOf(date, 8 * 60));
    if (end > from && start < to) found.push({ from: start, to: end });
  }
  return found;
}
