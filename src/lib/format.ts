import { localParts, makeZone } from '../../shared/domain/zoned-time.ts';
import type { Zone } from '../../shared/domain/zoned-time.ts';

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
const months = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
];

const zones = new Map<string, Zone>();

/** The zone of a site, made once: its offsets are cached inside it. */
export function zoneOf(timeZone: string): Zone {
  let zone = zones.get(timeZone);
  if (!zone) {
    zone = makeZone(timeZone);
    zones.set(timeZone, zone);
  }
  return zone;
}

function partsAt(at: number, timeZone: string) {
  const parts = localParts(zoneOf(timeZone).toLocal(at));
  return { ...parts, weekday: weekdays[parts.weekday - 1], monthName: months[parts.month - 1] };
}

const two = (value: number) => String(value).padStart(2, '0');

/** Time of day at the site, 24 h: "21:00". */
export function formatTime(at: number, timeZone: string): string {
  const { hour, minute } = partsAt(at, timeZone);
  return `${two(hour)}:${two(minute)}`;
}

/** The hour alone, as the ribbon shows it: "21". */
export function formatHour(at: number, timeZone: string): string {
  return two(partsAt(at, timeZone).hour);
}

/** "Wednesday 2 December" or, short, "Wed 2 Dec". */
export function formatDay(at: number, timeZone: string, length: 'long' | 'short' = 'long'): string {
  const { weekday, day, monthName } = partsAt(at, timeZone);
  if (length === 'long') return `${weekday} ${String(day)} ${monthName}`;
  return `${weekday.slice(0, 3)} ${String(day)} ${monthName.slice(0, 3)}`;
}

/** "Tuesday", of an ISO weekday, 1 Monday .. 7 Sunday. */
export function weekdayName(weekday: number): string {
  return weekdays[weekday - 1];
}

/** "Tue" */
export function formatWeekday(at: number, timeZone: string): string {
  return partsAt(at, timeZone).weekday.slice(0, 3);
}

/** "20 Nov 2026" */
export function formatDate(at: number, timeZone: string): string {
  const { day, monthName, year } = partsAt(at, timeZone);
  return `${String(day)} ${monthName.slice(0, 3)} ${String(year)}`;
}

/** "20 Nov 2026, 18:40" */
export function formatDateTime(at: number, timeZone: string): string {
  return `${formatDate(at, timeZone)}, ${formatTime(at, timeZone)}`;
}

/** A length of time in the words of a person: "22 minutes", "4 h 20 min", "11 days". Rounded down. */
export function formatAge(seconds: number): string {
  const minutes = Math.max(0, Math.floor(seconds / 60));
  if (minutes < 1) return 'under a minute';
  if (minutes < 60) return formatCount(minutes, 'minute');
  if (minutes < 48 * 60) {
    const hours = Math.floor(minutes / 60);
    const rest = minutes % 60;
    return rest === 0 ? formatCount(hours, 'hour') : `${String(hours)} h ${String(rest)} min`;
  }
  return formatCount(Math.floor(minutes / 1440), 'day');
}

/** Whole number with separators: "1,260". */
export function formatNumber(value: number, decimals = 0): string {
  const [whole, part] = Math.abs(value).toFixed(decimals).split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+$)/g, ',');
  const sign = value < 0 && Number(value.toFixed(decimals)) !== 0 ? '−' : '';
  return part ? `${sign}${grouped}.${part}` : `${sign}${grouped}`;
}

/** Number and noun that agree: "1 bed", "5 beds". */
export function formatCount(value: number, one: string, many = `${one}s`): string {
  return `${formatNumber(value)} ${value === 1 ? one : many}`;
}

/** Signed whole number for headroom and gaps: "+3", "0", "−2". */
export function formatSigned(value: number): string {
  return value > 0 ? `+${formatNumber(value)}` : formatNumber(value);
}

/** Names as a list: "Acute, Ambulatory and Children". */
export function formatList(names: readonly string[]): string {
  if (names.length < 2) return names.join('');
  return `${names.slice(0, -1).join(', ')} and ${names.at(-1) ?? ''}`;
}
