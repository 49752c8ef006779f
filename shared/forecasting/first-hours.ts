import type { HourlyCounts } from './arrival-model.ts';

/** The first `length` hours of the counts, whole days of them: what was known at an origin. */
export function firstHours(counts: HourlyCounts, length: number): HourlyCounts {
  return {
    firstLocalHour: counts.firstLocalHour,
    exposureHours: counts.exposureHours.slice(0, length),
    counts: counts.counts.map((arrivals) => arrivals.slice(0, length)),
    ...(counts.areaExposure ? { areaExposure: counts.areaExposure.map((hours) => hours.slice(0, length)) } : {}),
  };
}
