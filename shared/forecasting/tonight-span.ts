import type { Zone } from '../domain/zoned-time.ts';
import { localDate, localParts } from '../domain/zoned-time.ts';
import type { ShiftRisk } from './outlook-types.ts';

/** With less than this left of a night, seconds, what is ahead is the day and the next night. */
export const nightIsOverBefore = 3 * 3600;

/** A shift that crosses local midnight. */
export function isNight(shift: Pick<ShiftRisk, 'from' | 'to'>, zone: Zone): boolean {
  return localDate(zone.toLocal(shift.from)) !== localDate(zone.toLocal(shift.to - 1));
}

/**
 * End of the coming night, UTC seconds: the end of the first shift across local midnight with three
 * hours or more of it to come; without such a shift the next 08:00 of the site.
 */
export function endOfTonight(shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[], now: number, zone: Zone): number {
  const night = shifts.find((shift) => shift.to - now >= nightIsOverBefore && isNight(shift, zone));
  if (night) return night.to;
  const { hour, minute } = localParts(zone.toLocal(now));
  const until = 8 * 3600 - hour * 3600 - minute * 60;
  return now + (until >= nightIsOverBefore ? until : until + 86_400);
}

/**
 * Indexes of the outlook's hours that lie after now and before the end of the coming night, 24 at
 * most, so that no time of day stands for two of them.
 */
export function hoursOfTonight(
  result: { hours: readonly number[]; areas: readonly { shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[] }[] },
  now: number,
  zone: Zone,
): number[] {
  const end = endOfTonight(result.areas[0]?.shifts ?? [], now, zone);
  return result.hours.flatMap((at, index) => (at > now && at < end ? [index] : [])).slice(0, 24);
}
