import type { HourlyCounts } from './arrival-model.ts';

/** What a reader must know of the history behind a fit, in words; areas by number from 1. */
export function arrivalCautions(counts: HourlyCounts, weeks: number): string[] {
  const cautions: string[] = [];
  if (weeks < 8) cautions.push('Under eight weeks of history: a coarse weekly profile, for 24 hours ahead at most.');
  else if (weeks < 52) cautions.push('Under a year of history: winter or summer not seen yet.');
  else if (weeks < 104) cautions.push('Under two years of history: the season is held nearly flat.');
  counts.counts.forEach((arrivals, area) => {
    const total = arrivals.reduce((sum, n) => sum + n, 0);
    if (total === 0)
      cautions.push(`Area ${area + 1} has no arrivals: its rate is next to nothing, not known to be nothing.`);
    else if (total < 50) cautions.push(`Area ${area + 1} has only ${total} arrivals: its rates are mostly assumption.`);
    const busiest = arrivals.reduce((most, n) => Math.max(most, n), 0);
    if (total >= 50 && busiest > total / 2) {
      cautions.push(`Area ${area + 1} has most of its arrivals in a single hour: check the log.`);
    }
  });
  let longest = 0;
  let run = 0;
  for (const exposure of counts.exposureHours) {
    run = exposure > 0 ? 0 : run + 1;
    longest = Math.max(longest, run);
  }
  if (longest >= 24) cautions.push(`The log has a gap of ${Math.round(longest / 24)} days.`);
  return cautions;
}
