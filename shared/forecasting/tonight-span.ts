import type { Zone } from '../domain/zoned-time.ts';
import { localDate, localParts } from '../domain/zoned-time.ts';
import type { ShiftRisk } from './outlook-types.ts';

/**
 * End of the coming night, UTC seconds: the end of the first shift still running or to come that
 * crosses local midnight; without such a shift the next 08:00 of the site.
 */
export function endOfTonight(shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[], now: number, zone: Zone): number {
  const night = shifts.find(
    (shift) => shift.to > now && localDate(zone.toLocal(shift.from)) !== localDate(zone.toLocal(shift.to - 1)),
  );
  if (night) return night.to;
  const { hour, minute } = localParts(zone.toLocal(now));
  const sinceMidnight = hour * 3600 + minute * 60;
  const until = 8 * 3600 - sinceMidnight;
  return now + (until > 0 ? until : until + 86_400);
}

/**
 * Indexes of the outlook's hours that lie after now and before the end of the coming night. In the
 * last minutes of a night, with no full hour of it left, the coming night is the next one.
 */
export function hoursOfTonight(
  result: { hours: readonly number[]; areas: readonly { shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[] }[] },
  now: number,
  zone: Zone,
): number[] {
  const first = result.hours.find((at) => at > now);
  if (first === undefined) return [];
  const end = endOfTonight(result.areas[0]?.shifts ?? [], first, zone);
  return result.hours.flatMap((at, index) => (at > now && at < end ? [index] : []));
}
