import { hoursOfWeek } from '../domain/hour-of-week.ts';
import { poissonLogPmf } from '../stochastic/poisson.ts';
import type { HourlyCounts } from './arrival-model.ts';
import { profileHour, type CalendarIndex } from './calendar-effect.ts';
import { profileExposure } from './profile-exposure.ts';
import { profileRates, usualScales } from './weekly-profile.ts';

/** Longest memory first; a shorter one must be better by so many nats in all, which chance seldom gives. */
const candidates = [null, 104, 52, 26];
const clearlyBetter = 3;
const stretchWeeks = 12;

/**
 * How fast the weekly profile forgets, by rolling-origin log score: from origins twelve weeks apart over the last two
 * years, the profile fitted on what came before is scored on the hours of the twelve weeks after, given each day's total
 * (so that the level plays no part). Whole site. With less than 40 weeks everything is kept.
 * Cost: candidates × origins × one profile fit.
 */
export function chooseHalfLife(counts: HourlyCounts, index: CalendarIndex, dayFactor: Float64Array): number | null {
  const length = counts.exposureHours.length;
  const stretch = stretchWeeks * hoursOfWeek;
  const firstOrigin = Math.max(24 * hoursOfWeek, length - 104 * hoursOfWeek);
  if (length < firstOrigin + 2 * stretch) return null;
  const total = new Float64Array(length);
  for (const arrivals of counts.counts) for (let i = 0; i < length; i += 1) total[i] += arrivals[i];
  const site: HourlyCounts = {
    firstLocalHour: counts.firstLocalHour,
    exposureHours: counts.exposureHours,
    counts: [total],
  };
  const score = candidates.map(() => 0);
  for (let origin = Math.floor(firstOrigin / 24) * 24; origin + stretch <= length; origin += stretch) {
    candidates.forEach((halfLife, c) => {
      const sums = profileExposure(site, 0, index, dayFactor, halfLife, 0, origin);
      const ratePerHour = profileRates(sums.counts, sums.exposure, usualScales);
      for (let start = origin; start < origin + stretch; start += 24) {
        if (index.byDay.has((site.firstLocalHour + start) / 24)) continue;
        let expected = 0;
        let observed = 0;
        for (let i = start; i < start + 24; i += 1) {
          expected += ratePerHour[profileHour(index, site.firstLocalHour + i)] * site.exposureHours[i];
          observed += total[i];
        }
        if (!(expected > 0 && observed > 0)) continue;
        for (let i = start; i < start + 24; i += 1) {
          if (!(site.exposureHours[i] > 0)) continue;
          const rate = ratePerHour[profileHour(index, site.firstLocalHour + i)] * site.exposureHours[i];
          score[c] -= poissonLogPmf(total[i], (rate * observed) / expected);
        }
      }
    });
  }
  let best = 0;
  for (let c = 1; c < candidates.length; c += 1) if (score[c] < score[best] - clearlyBetter) best = c;
  return candidates[best];
}
