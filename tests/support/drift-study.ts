import { watchDrift, type DriftFinding } from '../../shared/forecasting/drift-watch.ts';
import { simulateSiteYear, type SiteYear } from './simulate-site-year.ts';

export interface DriftRates {
  /** False flags a site-year, each followed by a new model (the watch begins again). */
  falsePerYear: number;
  /** Share of runs flagged within three weeks of a change of level by 10 %, up or down. */
  shiftWithinThree: number;
  /** Share flagged within twelve weeks of intervals becoming 20 % too narrow. */
  narrowWithinTwelve: number;
}

const weeksBefore = 12;

/** How often the watch is wrong, and how soon right, over simulated site-years. */
export function studyDrift(
  site: Pick<SiteYear, 'visitsPerDay' | 'daysPerLog'>,
  runs: number,
  seed: number,
): DriftRates {
  let falseFlags = 0;
  let shifted = 0;
  let narrow = 0;
  for (let run = 0; run < runs; run += 1) {
    falseFlags += falseFlagsOf(simulateSiteYear({ ...site, weeks: 52, seed: seed + run }));
    // A change may begin on any day of a week, and go either way.
    const fromDay = weeksBefore * 7 + (run % 7);
    const factor = run % 2 === 0 ? 1.1 : 1 / 1.1;
    const shift = { fromDay, factor };
    shifted += flaggedBy({ ...site, weeks: weeksBefore + 4, seed: seed + run, shift }, fromDay, 3) ? 1 : 0;
    const wide = { fromDay, sdRatio: 1.25 };
    narrow += flaggedBy({ ...site, weeks: weeksBefore + 13, seed: seed + run, narrow: wide }, fromDay, 12) ? 1 : 0;
  }
  return { falsePerYear: falseFlags / runs, shiftWithinThree: shifted / runs, narrowWithinTwelve: narrow / runs };
}

/** Flags of a year without a change; after each the watch begins anew, as with a new model. */
function falseFlagsOf(series: ReturnType<typeof simulateSiteYear>): number {
  let flags = 0;
  let from = 0;
  for (;;) {
    const rest = series.map(({ name, scores }) => ({ name, scores: scores.filter(({ week }) => week >= from) }));
    const first = watchDrift(rest).findings.at(0);
    if (!first) return flags;
    flags += 1;
    from = first.week + 1;
  }
}

/**
 * Whether a check finds something no later than some weeks after the change. Runs with a false flag before it are judged by what
 * is found from the change on.
 */
function flaggedBy(year: SiteYear, fromDay: number, within: number): boolean {
  const changed = Math.floor(fromDay / 7);
  let series = simulateSiteYear(year);
  for (;;) {
    const first: DriftFinding | undefined = watchDrift(series).findings.at(0);
    if (!first) return false;
    if (first.week >= changed) {
      // A week is checked when it has ended.
      return (first.week + 1) * 7 - fromDay <= within * 7;
    }
    series = series.map(({ name, scores }) => ({ name, scores: scores.filter(({ week }) => week > first.week) }));
  }
}
