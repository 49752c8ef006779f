import { intervalLevels } from './scoring.ts';
import { meanPinball } from './score-issued.ts';
import { resampledError, summariseScores, type ScoredCount } from './score-summary.ts';

/** Mean scores of one of two models. */
export interface ComparedSide {
  logScore: number | null;
  mase: number | null;
  /** Mean over the scored levels. */
  pinball: number | null;
  coverage: { level: number; observed: number | null; expected: number | null; se: number | null }[];
}

/** A mean difference, first less second: under 0 the first did better. */
export interface ScoreDifference {
  value: number;
  /** By resampling whole weeks; null below two. */
  se: number | null;
  /** Standard error that the simulation itself leaves; null without repeats. */
  monteCarlo: number | null;
}

export interface ComparedScale {
  n: number;
  candidate: ComparedSide;
  inUse: ComparedSide;
  /** Null where nothing was scored. */
  difference: { logScore: ScoreDifference; pinball: ScoreDifference } | null;
}

/**
 * Pairs the scores of two models for the same forecasts: means of each, and mean differences with the error from resampling
 * whole weeks and that of the simulation (the spread of repeats with other seeds, over the root of their number).
 * @param first,second scores by repeat, in the same order
 * Throws a RangeError where they do not pair.
 */
export function pairScores(
  first: readonly ScoredCount[][],
  second: readonly ScoredCount[][],
  seed: number,
): ComparedScale {
  const n = first[0].length;
  if (first.length !== second.length || [...first, ...second].some((scores) => scores.length !== n)) {
    throw new RangeError('scores of two models must be of the same forecasts');
  }
  return {
    n,
    candidate: sideOf(first, seed),
    inUse: sideOf(second, seed),
    difference:
      n === 0
        ? null
        : {
            logScore: differenceOf(first, second, (score) => score.logScore, seed),
            pinball: differenceOf(first, second, (score) => meanPinball(score.pinball), seed),
          },
  };
}

function sideOf(batches: readonly ScoredCount[][], seed: number): ComparedSide {
  const all = summariseScores(batches.flat(), 500, seed);
  const levels = Object.values(all.pinball);
  return {
    logScore: all.logScore,
    mase: all.mase,
    pinball: all.n === 0 ? null : meanPinball(levels.map((loss) => loss ?? 0)),
    coverage: intervalLevels.map((level) => ({ level, ...all.coverage[String(level)] })),
  };
}

function differenceOf(
  first: readonly ScoredCount[][],
  second: readonly ScoredCount[][],
  scoreOf: (score: ScoredCount) => number,
  seed: number,
): ScoreDifference {
  const batches = first.length;
  const weeks = new Map<number, { sum: number; n: number }>();
  const ofBatch = new Array<number>(batches).fill(0);
  first.forEach((scores, b) => {
    scores.forEach((score, i) => {
      const difference = scoreOf(score) - scoreOf(second[b][i]);
      const own = weeks.get(score.week) ?? { sum: 0, n: 0 };
      weeks.set(score.week, { sum: own.sum + difference / batches, n: own.n + 1 / batches });
      ofBatch[b] += difference / scores.length;
    });
  });
  const value = ofBatch.reduce((sum, each) => sum + each, 0) / batches;
  const spread = ofBatch.reduce((sum, each) => sum + (each - value) ** 2, 0);
  return {
    value,
    se: resampledError([...weeks.values()], 500, seed),
    monteCarlo: batches < 2 ? null : Math.sqrt(spread / (batches - 1) / batches),
  };
}
