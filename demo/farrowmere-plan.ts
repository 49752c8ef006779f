/** Staffed beds from 07:00 (Early), 14:00 (Late) and 21:00 (Night) of a day. */
export type DayPlan = readonly [early: number, late: number, night: number];

const starts = [7, 14, 21];

/**
 * Staffed beds by half hour of week, 336 figures, Monday 00:00 first, from one line a day.
 * The hours before 07:00 belong to the night of the day before.
 */
export function staffedByHalfHour(days: readonly DayPlan[]): number[] {
  if (days.length !== 7) throw new RangeError(`a week has 7 days, got ${String(days.length)}`);
  return Array.from({ length: 336 }, (_, halfHour) => {
    const day = Math.floor(halfHour / 48);
    const hour = (halfHour % 48) / 2;
    const shift = starts.findLastIndex((start) => hour >= start);
    return shift < 0 ? days[(day + 6) % 7][2] : days[day][shift];
  });
}

/**
 * The demo's plan by care area, Monday first. It was set against need in 18 months of the demo's own visits, so that an
 * ordinary evening holds something to decide: Acute at real risk on some nights, the rest mostly comfortable.
 */
export const dayPlans: Record<string, readonly DayPlan[]> = {
  'farrowmere-general-resuscitation': [
    [6, 5, 6],
    [5, 5, 5],
    [5, 5, 5],
    [5, 5, 5],
    [5, 5, 6],
    [6, 5, 6],
    [6, 5, 6],
  ],
  'farrowmere-general-acute': [
    [26, 28, 27],
    [26, 28, 26],
    [26, 28, 26],
    [26, 28, 26],
    [26, 28, 28],
    [26, 28, 30],
    [28, 28, 28],
  ],
  'farrowmere-general-ambulatory': [
    [18, 18, 14],
    [18, 18, 14],
    [18, 18, 14],
    [18, 18, 14],
    [18, 18, 14],
    [20, 20, 16],
    [20, 20, 16],
  ],
  'farrowmere-general-children': [
    [8, 10, 10],
    [8, 10, 10],
    [8, 10, 10],
    [8, 10, 10],
    [8, 10, 10],
    [8, 12, 12],
    [8, 12, 12],
  ],
  'farrowmere-general-observation': [
    [12, 11, 12],
    [12, 11, 12],
    [12, 11, 12],
    [12, 11, 12],
    [12, 11, 12],
    [12, 11, 12],
    [12, 11, 12],
  ],
  'saltby-bay-acute': [
    [9, 11, 10],
    [9, 11, 10],
    [9, 11, 10],
    [9, 11, 10],
    [9, 11, 10],
    [9, 11, 10],
    [10, 11, 11],
  ],
  'saltby-bay-minor-injuries': [
    [8, 8, 6],
    [8, 8, 6],
    [8, 8, 6],
    [8, 8, 6],
    [8, 8, 6],
    [9, 9, 7],
    [10, 10, 7],
  ],
};
