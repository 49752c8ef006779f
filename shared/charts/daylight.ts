import type { Zone } from '../domain/zoned-time.ts';
import { localParts } from '../domain/zoned-time.ts';

/** Hours of daylight at about 50 degrees of latitude, January first: [first, last] whole hour that is light. */
const northern: readonly (readonly [number, number])[] = [
  [8, 15],
  [7, 16],
  [7, 17],
  [6, 18],
  [5, 19],
  [5, 20],
  [5, 20],
  [6, 19],
  [7, 18],
  [7, 17],
  [7, 15],
  [8, 15],
];

/**
 * Tone of the sky over the ribbon, 1 day .. 4 night: decoration that tells night from day at a
 * glance. Only the zone is known, not the latitude, so the month's usual hours stand in; a zone
 * whose clocks go forward in the southern summer takes the other half of the year.
 */
export function skyTone(zone: Zone, at: number): 1 | 2 | 3 | 4 {
  const { hour, month, year } = localParts(zone.toLocal(at));
  const january = Date.UTC(year, 0, 15) / 1000;
  const july = Date.UTC(year, 6, 15) / 1000;
  const southern = zone.offsetAt(january) > zone.offsetAt(july);
  const [first, last] = northern[(month - 1 + (southern ? 6 : 0)) % 12];
  if (hour > first && hour < last) return 1;
  if (hour === first || hour === last) return 2;
  if (hour === first - 1 || hour === last + 1) return 3;
  return 4;
}
