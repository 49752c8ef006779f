import { instantOfLocal } from './shift-times.ts';
import type { Zone } from './zoned-time.ts';

/** A meeting stays the one at hand for this long after it begins, seconds. */
const meetingLasts = 45 * 60;

/** The bed meetings in [from, to), UTC seconds ascending. */
export function meetingsBetween(zone: Zone, minutes: readonly number[], from: number, to: number): number[] {
  const found: number[] = [];
  const last = Math.floor(zone.toLocal(to) / 86_400) + 1;
  for (let day = Math.floor(zone.toLocal(from) / 86_400) - 1; day <= last; day += 1) {
    for (const minute of minutes) {
      const at = instantOfLocal(zone, day * 86_400 + minute * 60);
      if (at >= from && at < to) found.push(at);
    }
  }
  return found.sort((a, b) => a - b);
}

/** The meeting that runs or comes next; null for a site without any. */
export function meetingAtHand(zone: Zone, minutes: readonly number[], now: number): number | null {
  return meetingsBetween(zone, minutes, now - meetingLasts, now + 2 * 86_400).at(0) ?? null;
}
