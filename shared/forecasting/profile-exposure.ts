import { hoursOfWeek } from '../domain/hour-of-week.ts';
import type { HourlyCounts } from './arrival-model.ts';
import { profileHour, type CalendarIndex } from './calendar-effect.ts';

/**
 * Counts and exposure of each hour of the week for one area, older weeks weighing less.
 *
 * Exposure is real hours times what else multiplied the rate that day (level, season), so that counts / exposure is the
 * profile at level 1. Days in the calendar are left out: they tell of their own effect, not of the week's shape.
 * @param dayFactor what multiplied the rate on each day of the counts
 * @param halfLifeWeeks weeks after which a count weighs half; null weighs all alike
 */
export function profileExposure(
  counts: HourlyCounts,
  area: number,
  index: CalendarIndex,
  dayFactor: Float64Array,
  halfLifeWeeks: number | null,
  fromHour = 0,
  toHour: number = counts.exposureHours.length,
): { counts: Float64Array; exposure: Float64Array } {
  const arrivals = counts.counts[area];
  const hours = counts.areaExposure?.[area] ?? counts.exposureHours;
  const sums = { counts: new Float64Array(hoursOfWeek), exposure: new Float64Array(hoursOfWeek) };
  const decay = halfLifeWeeks !== null ? Math.LN2 / (7 * halfLifeWeeks) : 0;
  for (let start = fromHour; start < toHour; start += 24) {
    const day = (counts.firstLocalHour + start) / 24;
    if (index.byDay.has(day)) continue;
    const weight = Math.exp((-decay * (toHour - start)) / 24);
    const factor = weight * dayFactor[start / 24];
    for (let i = start; i < start + 24; i += 1) {
      if (!(hours[i] > 0)) continue;
      const hour = profileHour(index, counts.firstLocalHour + i);
      sums.counts[hour] += weight * arrivals[i];
      sums.exposure[hour] += factor * hours[i];
    }
  }
  return sums;
}

/** A first profile: each hour's rate pulled to the mean of all by five arrivals' worth, enough to start from. */
export function roughProfile(sums: { counts: Float64Array; exposure: Float64Array }): number[] {
  let total = 0.5;
  let exposure = 1e-9;
  for (let hour = 0; hour < hoursOfWeek; hour += 1) {
    total += sums.counts[hour];
    exposure += sums.exposure[hour];
  }
  const mean = total / exposure;
  return Array.from(sums.counts, (count, hour) => (count + 5) / (sums.exposure[hour] + 5 / mean));
}
