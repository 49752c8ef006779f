import { hoursOfWeek, type LocalHour } from './hour-of-week.ts';

/** 1970-01-01 was a Thursday: a local hour this much later lies in the same place of a week from Monday. */
const fromMonday = 72;

/** The week that a local hour lies in; weeks begin on Monday. */
export function weekOf(localHour: LocalHour): number {
  return Math.floor((localHour + fromMonday) / hoursOfWeek);
}

/** First local hour of a week. */
export function firstHourOfWeek(week: number): LocalHour {
  return week * hoursOfWeek - fromMonday;
}

/** Arrivals by local hour, kept by week, so that stray years cost little. */
export class HourlyArrivals {
  private readonly weeks = new Map<number, Uint32Array>();

  add(localHour: LocalHour): void {
    const week = weekOf(localHour);
    let hours = this.weeks.get(week);
    if (!hours) this.weeks.set(week, (hours = new Uint32Array(hoursOfWeek)));
    hours[localHour - firstHourOfWeek(week)] += 1;
  }

  /** Arrivals of `length` local hours from the first. */
  from(first: LocalHour, length: number): Float64Array {
    const counts = new Float64Array(length);
    for (let hour = 0; hour < length; hour += 1) {
      const week = weekOf(first + hour);
      counts[hour] = this.weeks.get(week)?.[first + hour - firstHourOfWeek(week)] ?? 0;
    }
    return counts;
  }
}
