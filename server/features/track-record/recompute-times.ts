import { instantOfLocal, type ShiftPattern } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';

const day = 86_400;
const week = 7 * day;
/** The local time at which the week ahead is issued each day. */
const dailyAtSeconds = 5 * 3600;

/** The first local Monday 00:00 after an instant. */
export function mondayAfter(zone: Zone, at: number): number {
  const localDay = Math.floor(zone.toLocal(at) / day);
  const weekday = (((localDay + 3) % 7) + 7) % 7;
  return instantOfLocal(zone, (localDay + 7 - weekday) * day);
}

/** An hour before each shift in [from, to), ascending. */
export function timesOfOutlooks(zone: Zone, shifts: readonly ShiftPattern[], from: number, to: number): number[] {
  const times = new Set<number>();
  const first = Math.floor(zone.toLocal(from) / day);
  for (let at = first - 1; at * day <= zone.toLocal(to) + day; at += 1) {
    for (const { startMinute } of shifts) {
      const issuedAt = instantOfLocal(zone, at * day + startMinute * 60) - 3600;
      if (issuedAt >= from && issuedAt < to) times.add(issuedAt);
    }
  }
  return [...times].sort((a, b) => a - b);
}

/** Every day's local time of the week ahead in [from, to), ascending. */
export function dailyTimes(zone: Zone, from: number, to: number): number[] {
  const first = Math.floor(zone.toLocal(from) / day);
  const days = Math.ceil((to - from) / day) + 1;
  return Array.from({ length: days }, (_, i) => instantOfLocal(zone, (first + i) * day + dailyAtSeconds)).filter(
    (at) => at >= from && at < to,
  );
}

/** The instant from which a year, or fewer weeks, before `now` can be recomputed: half a year of log must lie before it. */
export function recomputeFrom(logFrom: number, now: number, weeks: number): number {
  return Math.max(now - weeks * week, logFrom + 26 * week);
}
