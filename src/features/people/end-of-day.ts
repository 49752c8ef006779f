import { localDate, localSecondsOf } from '../../../shared/domain/zoned-time.ts';
import { zoneOf } from '../../lib/format.ts';

/** The instant at which a day (YYYY-MM-DD) is over in a zone; null for no day. */
export function endOfDay(date: string, timeZone: string): number | null {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(date)) return null;
  const zone = zoneOf(timeZone);
  const local = localSecondsOf(date) + 86_400;
  return zone.fromLocal(local).at(0) ?? zone.fromLocal(local + 3600).at(0) ?? null;
}

/** The last day of a role that ends at an instant. */
export function lastDay(endsAt: number, timeZone: string): string {
  return localDate(zoneOf(timeZone).toLocal(endsAt - 1));
}
