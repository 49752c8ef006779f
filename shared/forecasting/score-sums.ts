import { pinballLevels, intervalLevels } from './scoring.ts';
import { meanPinball } from './score-issued.ts';
import { pastRuleNames, type PastRule } from './past-baselines.ts';
import { resampledError } from './score-summary.ts';

/** Edges of the reliability diagram's bins. */
export const chanceEdges = [0, 0.02, 0.05, 0.1, 0.25, 0.5, 0.8, 1] as const;
const chanceBins = chanceEdges.length - 1;
export const pitBins = 10;

/** One kept score, as far as sums are made of it; null where the whole law was not known. */
export interface KeptScore {
  observed: number;
  logScore: number | null;
  absoluteError: number | null;
  naiveError: number | null;
  pinball: number[] | null;
  /** Low, high and exact mass (null where not known) by level. */
  intervals: [low: number, high: number, mass: number | null][] | null;
  pitLower: number | null;
  pitUpper: number | null;
  floorPinball: number | null;
  floorError: number | null;
  baselines: Partial<Record<PastRule, { pinball: number; error: number }>> | null;
  chance: number | null;
  short: boolean | null;
}

/** Sums over scores; plain, so that they can be stored. Sums of parts are the whole. */
export interface ScoreSums {
  n: number;
  /** Scores with a distribution. */
  laws: number;
  logScore: { n: number; sum: number };
  error: number;
  pinball: number[];
  floor: { n: number; pinball: number; error: number; ownPinball: number };
  naive: { n: number; own: number; naive: number; floor: number };
  baselines: Record<PastRule, { n: number; pinball: number; error: number; ownPinball: number; naive: number }>;
  covered: number[];
  mass: { n: number; sum: number[] };
  pit: number[];
  pitN: number;
  chances: { n: number[]; sum: number[]; short: number[]; brier: number };
}

export function emptySums(): ScoreSums {
  const zeros = (length: number): number[] => new Array<number>(length).fill(0);
  const rule = () => ({ n: 0, pinball: 0, error: 0, ownPinball: 0, naive: 0 });
  return {
    n: 0,
    laws: 0,
    logScore: { n: 0, sum: 0 },
    error: 0,
    pinball: zeros(pinballLevels.length),
    floor: { n: 0, pinball: 0, error: 0, ownPinball: 0 },
    naive: { n: 0, own: 0, naive: 0, floor: 0 },
    baselines: { lastWeek: rule(), fourWeeks: rule(), year: rule() },
    covered: zeros(intervalLevels.length),
    mass: { n: 0, sum: zeros(intervalLevels.length) },
    pit: zeros(pitBins),
    pitN: 0,
    chances: { n: zeros(chanceBins), sum: zeros(chanceBins), short: zeros(chanceBins), brier: 0 },
  };
}

/** Adds one score to sums. */
export function addScore(sums: ScoreSums, score: KeptScore): void {
  sums.n += 1;
  if (score.chance !== null && score.short !== null) addChance(sums.chances, score.chance, score.short);
  const { pinball, intervals, absoluteError } = score;
  if (pinball === null || intervals === null || absoluteError === null) return;
  const own = meanPinball(pinball);
  sums.laws += 1;
  sums.error += absoluteError;
  pinball.forEach((loss, t) => (sums.pinball[t] += loss));
  intervals.forEach(([low, high], l) => (sums.covered[l] += score.observed >= low && score.observed <= high ? 1 : 0));
  if (intervals.every(([, , mass]) => mass !== null)) {
    sums.mass.n += 1;
    intervals.forEach(([, , mass], l) => (sums.mass.sum[l] += mass ?? 0));
  }
  if (score.logScore !== null) {
    sums.logScore.n += 1;
    sums.logScore.sum += score.logScore;
  }
  if (score.floorPinball !== null && score.floorError !== null) {
    sums.floor.n += 1;
    sums.floor.pinball += score.floorPinball;
    sums.floor.error += score.floorError;
    sums.floor.ownPinball += own;
  }
  if (score.naiveError !== null) {
    sums.naive.n += 1;
    sums.naive.own += absoluteError;
    sums.naive.naive += score.naiveError;
    sums.naive.floor += score.floorError ?? 0;
  }
  for (const rule of pastRuleNames) {
    const other = score.baselines?.[rule];
    if (!other || score.naiveError === null) continue;
    const kept = sums.baselines[rule];
    kept.n += 1;
    kept.pinball += other.pinball;
    kept.error += other.error;
    kept.ownPinball += own;
    kept.naive += score.naiveError;
  }
  if (score.pitLower !== null && score.pitUpper !== null) addPit(sums, score.pitLower, score.pitUpper);
}

function addChance(chances: ScoreSums['chances'], chance: number, short: boolean): void {
  let bin = 0;
  while (bin < chanceBins - 1 && chance >= chanceEdges[bin + 1]) bin += 1;
  chances.n[bin] += 1;
  chances.sum[bin] += chance;
  chances.short[bin] += short ? 1 : 0;
  chances.brier += (chance - (short ? 1 : 0)) ** 2;
}

/** Spreads a count's stretch of the PIT evenly over the bins (Czado, Gneiting & Held 2009, eq. 2). */
function addPit(sums: ScoreSums, lower: number, upper: number): void {
  sums.pitN += 1;
  if (upper <= lower) {
    sums.pit[Math.min(pitBins - 1, Math.floor(lower * pitBins))] += 1;
    return;
  }
  for (let bin = 0; bin < pitBins; bin += 1) {
    const shared = Math.min(upper, (bin + 1) / pitBins) - Math.max(lower, bin / pitBins);
    if (shared > 0) sums.pit[bin] += shared / (upper - lower);
  }
}

/** Adds sums to others, in place. */
export function addSums(to: ScoreSums, more: ScoreSums): void {
  addDeep(to, more);
}

type Tree = { [key: string]: number | Tree };

function addDeep(to: object, more: object): void {
  // Lists by place: their keys as texts would cost most of the time of a page.
  if (Array.isArray(to)) {
    const [into, from] = [to as number[], more as number[]];
    for (let i = 0; i < into.length; i += 1) into[i] += from[i];
    return;
  }
  const into = to as Tree;
  const from = more as Tree;
  for (const key in into) {
    const value = into[key];
    if (typeof value === 'number') into[key] = value + (from[key] as number);
    else addDeep(value, from[key] as Tree);
  }
}

/** A share or mean with its standard error by resampling whole weeks; null where it cannot be told. */
export interface WithError {
  value: number | null;
  se: number | null;
}

/** What the sums of some weeks say. */
export interface RecordSummary {
  n: number;
  weeks: number;
  logScore: number | null;
  meanError: number | null;
  /** Mean absolute scaled error, and those that the floor and the rules of the past score on the same cases. */
  mase: number | null;
  floorMase: number | null;
  /** Mean pinball loss over the scored levels, in patients. */
  pinball: WithError;
  floorPinball: number | null;
  baselines: Record<PastRule, { n: number; mase: number | null; pinball: number | null; ownPinball: number | null }>;
  coverage: { level: number; observed: number | null; expected: number | null; se: number | null }[];
  /** Heights of the PIT histogram, all 1 if forecasts are right. */
  pit: number[];
  pitN: number;
  chances: { from: number; to: number; n: number; meanChance: number; share: number; se: number | null }[];
  /** All chances together: how often a shortfall was said and how often it came. */
  calledFor: { n: number; meanChance: number | null; share: number | null; se: number | null };
  brier: number | null;
}

/**
 * Summarises sums by week; an empty set gives nulls, never NaN.
 * @param errors 'ranges' leaves out the standard errors of chances, which cost as much as all others
 */
export function summariseSums(
  byWeek: readonly ScoreSums[],
  resamples = 400,
  errors: 'all' | 'ranges' = 'all',
): RecordSummary {
  const all = emptySums();
  for (const week of byWeek) addSums(all, week);
  const over = (sum: number, n: number): number | null => (n > 0 ? sum / n : null);
  const error = (value: (week: ScoreSums) => { sum: number; n: number }): number | null =>
    resampledError(
      byWeek.map(value).filter(({ n }) => n > 0),
      resamples,
    );
  const ratio = (a: number, b: number): number | null => (b > 0 ? a / b : null);
  const { chances } = all;
  const cases = chances.n.reduce((sum, n) => sum + n, 0);
  const massKnown = all.mass.n === all.laws;
  const sumOf = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0);
  return {
    n: all.n,
    weeks: byWeek.filter(({ n }) => n > 0).length,
    logScore: over(all.logScore.sum, all.logScore.n),
    meanError: over(all.error, all.laws),
    mase: ratio(all.naive.own, all.naive.naive),
    floorMase: ratio(all.naive.floor, all.naive.naive),
    pinball: {
      value: over(meanPinball(all.pinball), all.laws),
      se: error((week) => ({ sum: meanPinball(week.pinball), n: week.laws })),
    },
    floorPinball: over(all.floor.pinball, all.floor.n),
    baselines: Object.fromEntries(
      pastRuleNames.map((rule) => {
        const { n, pinball, error: missed, ownPinball, naive } = all.baselines[rule];
        return [rule, { n, mase: ratio(missed, naive), pinball: over(pinball, n), ownPinball: over(ownPinball, n) }];
      }),
    ) as RecordSummary['baselines'],
    coverage: intervalLevels.map((level, l) => ({
      level,
      observed: over(all.covered[l], all.laws),
      expected: over(all.mass.sum[l], all.mass.n),
      // Against the exact mass where it is known, so that discreteness is no noise.
      se: error((week) => ({ sum: week.covered[l] - (massKnown ? week.mass.sum[l] : 0), n: week.laws })),
    })),
    pit: all.pit.map((sum) => (all.pitN > 0 ? (pitBins * sum) / all.pitN : 0)),
    pitN: all.pitN,
    chances: chances.n.flatMap((n, bin) =>
      n === 0
        ? []
        : [
            {
              from: chanceEdges[bin],
              to: chanceEdges[bin + 1],
              n,
              meanChance: chances.sum[bin] / n,
              share: chances.short[bin] / n,
              se:
                errors === 'ranges'
                  ? null
                  : error((week) => ({ sum: week.chances.short[bin], n: week.chances.n[bin] })),
            },
          ],
    ),
    calledFor: {
      n: cases,
      meanChance: over(sumOf(chances.sum), cases),
      share: over(sumOf(chances.short), cases),
      se: error((week) => ({ sum: sumOf(week.chances.short) - sumOf(week.chances.sum), n: sumOf(week.chances.n) })),
    },
    brier: over(chances.brier, cases),
  };
}
