import { instantOfLocal } from './shift-times.ts';
import { isoWeekday, type Zone } from './zoned-time.ts';

/** When a weekly brief is due, in the site's own time. */
export interface BriefSchedule {
  /** ISO: 1 Monday .. 7 Sunday. */
  weekday: number;
  minuteOfDay: number;
}

const day = 86_400;

function dueInWeekOf(zone: Zone, { weekday, minuteOfDay }: BriefSchedule, localDay: number, weeks: number): number {
  const monday = localDay - (isoWeekday(localDay * day) - 1);
  return instantOfLocal(zone, (monday + weekday - 1 + 7 * weeks) * day + minuteOfDay * 60);
}

/** The last time at or before an instant that a brief was due, UTC seconds. A time that a clock change skips is moved on, one that it repeats is the first. */
export function lastDue(zone: Zone, schedule: BriefSchedule, at: number): number {
  const today = Math.floor(zone.toLocal(at) / day);
  const thisWeek = dueInWeekOf(zone, schedule, today, 0);
  return thisWeek <= at ? thisWeek : dueInWeekOf(zone, schedule, today, -1);
}

/** The first time after an instant that a brief is due, UTC seconds. */
export function nextDue(zone: Zone, schedule: BriefSchedule, at: number): number {
  const today = Math.floor(zone.toLocal(at) / day);
  const thisWeek = dueInWeekOf(zone, schedule, today, 0);
  return thisWeek > at ? thisWeek : dueInWeekOf(zone, schedule, today, 1);
}
