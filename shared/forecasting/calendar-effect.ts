import { isoWeekday, localSecondsOf } from '../domain/zoned-time.ts';
import { hourOfWeek } from '../domain/hour-of-week.ts';
import type { EffectPrior } from './arrival-model.ts';
import type { CalendarDay } from './visit-table.ts';

/** Prior spread, on the log scale, of what public holidays have in common, of each one's own part, and of the day after. */
const holidaySd = 0.2;
const ownHolidaySd = 0.1;
const afterHolidaySd = 0.07;
/** The days before a holiday differ too, people being away: by so much, for so many days. */
const beforeHolidaySd = 0.05;
const beforeDays = 6;
/** An event or closure without a stated effect and without a past: as likely a third more as a quarter less. */
const unknownEventSd = 0.2;

/** The calendar, ready to be asked about a day. */
export interface CalendarIndex {
  byDay: Map<number, CalendarDay[]>;
  holidayWeekday: number;
  all: readonly CalendarDay[];
}

/** Makes the index. Throws a RangeError naming a date that is none or a stated range that is not one. */
export function indexCalendar(calendar: readonly CalendarDay[], holidayWeekday: number): CalendarIndex {
  const byDay = new Map<number, CalendarDay[]>();
  for (const entry of calendar) {
    const range = entry.statedEffect;
    if (range && !(range[0] > 0 && range[1] >= range[0] && range[1] < 100)) {
      throw new RangeError(
        `stated effect of ${entry.name} must be a range of positive factors, got ${range.join(' to ')}`,
      );
    }
    const day = localSecondsOf(entry.date) / 86_400;
    const entries = byDay.get(day) ?? [];
    // Two lists may name the same day; the same name twice is one event.
    if (!entries.some((known) => known.name === entry.name)) entries.push(entry);
    byDay.set(day, entries);
  }
  return { byDay, holidayWeekday, all: calendar };
}

/** True when the day is a public holiday. `day` counts local days from 1970-01-01. */
export function isPublicHoliday(index: CalendarIndex, day: number): boolean {
  return index.byDay.get(day)?.some((entry) => entry.kind === 'public holiday') ?? false;
}

/** The hour of week whose profile a local hour takes: its own, or that of the weekday that holidays resemble. */
export function profileHour(index: CalendarIndex, localHour: number): number {
  const hour = hourOfWeek(localHour);
  if (index.holidayWeekday === 0 || index.byDay.size === 0) return hour;
  const day = Math.floor(localHour / 24);
  return isPublicHoliday(index, day) ? (index.holidayWeekday - 1) * 24 + (hour % 24) : hour;
}

/** The log-linear effects that act on a local day, by key. */
export function effectsOfDay(index: CalendarIndex, day: number): [key: string, value: number][] {
  const angle = (2 * Math.PI * day) / 365.2425;
  const effects: [string, number][] = [
    ['season sin 1', Math.sin(angle)],
    ['season cos 1', Math.cos(angle)],
    ['season sin 2', Math.sin(2 * angle)],
    ['season cos 2', Math.cos(2 * angle)],
  ];
  const entries = index.byDay.get(day) ?? [];
  const holiday = entries.some((entry) => entry.kind === 'public holiday');
  if (holiday) effects.push(['holiday', 1]);
  else if (isPublicHoliday(index, day - 1) && isoWeekday(day * 86_400) < 6) effects.push(['after holiday', 1]);
  for (const entry of entries) effects.push([`own:${entry.name}`, 1]);
  if (!holiday && index.byDay.size > 0) {
    const before = new Set<string>();
    for (let near = day + 1; near <= day + beforeDays; near += 1) {
      for (const entry of index.byDay.get(near) ?? []) if (entry.kind === 'public holiday') before.add(entry.name);
    }
    for (const name of before) effects.push([`before:${name}`, 1]);
  }
  return effects;
}

/** What is believed of an effect before any data. A stated range counts as uniform on the log scale. */
export function effectPrior(key: string, index: CalendarIndex, seasonSd: number): EffectPrior {
  if (key.startsWith('season')) return { key, mean: 0, sd: key.endsWith('1') ? seasonSd : seasonSd / 2 };
  if (key === 'holiday') return { key, mean: 0, sd: holidaySd };
  if (key === 'after holiday') return { key, mean: 0, sd: afterHolidaySd };
  if (key.startsWith('before:')) return { key, mean: 0, sd: beforeHolidaySd };
  const name = key.slice('own:'.length);
  const known = index.all.filter((entry) => entry.name === name);
  const stated = known.find((entry) => entry.statedEffect)?.statedEffect;
  if (stated) {
    const [low, high] = stated.map(Math.log);
    return { key, mean: (low + high) / 2, sd: (high - low) / Math.sqrt(12) };
  }
  const holiday = known.some((entry) => entry.kind === 'public holiday');
  return { key, mean: 0, sd: holiday ? ownHolidaySd : unknownEventSd };
}

/** Priors of every effect that acts on days [fromDay, toDay). */
export function effectPriors(index: CalendarIndex, fromDay: number, toDay: number, seasonSd: number): EffectPrior[] {
  const keys = new Set(['season sin 1', 'season cos 1', 'season sin 2', 'season cos 2']);
  for (let day = fromDay; day < toDay; day += 1) {
    if (index.byDay.size > 0) for (const [key] of effectsOfDay(index, day)) keys.add(key);
  }
  return [...keys].map((key) => effectPrior(key, index, seasonSd));
}
