import { localDate, localSecondsOf } from '../../../shared/domain/zoned-time.ts';
import { zoneOf } from '../../lib/format.ts';

/** An instant as a date-and-time field shows it, in the site's time: 2031-04-05T06:07. */
export function toLocalInput(at: number, timeZone: string): string {
  const local = zoneOf(timeZone).toLocal(at);
  const minute = Math.floor((((local % 86_400) + 86_400) % 86_400) / 60);
  const two = (value: number) => String(value).padStart(2, '0');
  return `${localDate(local)}T${two(Math.floor(minute / 60))}:${two(minute % 60)}`;
}

/** The instant that a date-and-time field means in the site's time, the later one of a repeated hour; null if it means none. */
export function fromLocalInput(text: string, timeZone: string): number | null {
  const match = /^(\d{4}-\d{2}-\d{2})T(\d{2}):(\d{2})/.exec(text);
  if (!match) return null;
  const local = localSecondsOf(match[1], Number(match[2]) * 60 + Number(match[3]));
  return zoneOf(timeZone).fromLocal(local).at(-1) ?? null;
}
