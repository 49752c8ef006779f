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
 * ordinary evening holds something to decide: Acute at real risk on some nights, the rest mostly within the planning risk of
 * any shortfall in the shift.
 */
export const dayPlans: Record<string, readonly DayPlan[]> = {
  'farrowmere-general-resuscitation': [
    [7, 6, 7],
    [6, 6, 7],
    [6, 6, 7],
    [6, 6, 7],
    [6, 6, 7],
    [7, 6, 7],
    [7, 6, 7],
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
    [22, 22, 16],
    [22, 22, 16],
    [22, 22, 16],
    [22, 22, 16],
    [22, 22, 16],
    [24, 24, 18],
    [24, 24, 18],
  ],
  'farrowmere-general-children': [
    [10, 14, 12],
    [10, 14, 12],
    [10, 14, 12],
    [10, 14, 12],
    [10, 14, 12],
    [12, 14, 14],
    [12, 14, 14],
  ],
  'farrowmere-general-observation': [
    [14, 14, 14],
    [14, 14, 14],
    [14, 14, 14],
    [14, 14, 14],
    [14, 14, 14],
    [14, 14, 14],
    [14, 14, 14],
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
