import { normalQuantile } from '../stochastic/normal.ts';

/** One scored forecast as the watch sees it, in order of time. */
export interface WatchedScore {
  /** Whole weeks, Monday to Sunday, counted on. */
  week: number;
  /** Randomised PIT: uniform if the forecast is right. */
  pit: number;
  observed: number;
  median: number;
}

/** What is watched: daily arrivals, or need some hours ahead. */
export interface WatchedSeries {
  name: keyof typeof limits;
  scores: readonly WatchedScore[];
}

export interface DriftFinding {
  series: WatchedSeries['name'];
  kind: 'more than forecast' | 'fewer than forecast' | 'ranges too narrow';
  /** Week whose check found it, and the week in which it seems to have begun. */
  week: number;
  since: number;
  /** Observed over forecast medians from then on. */
  ratio: number;
}

export interface DriftReport {
  /** Whole weeks with enough scores to be checked. */
  weeks: number;
  findings: DriftFinding[];
}

/** Weeks with fewer scores than this are passed over. */
const leastPerWeek = 4;
/** No verdict before this many weeks were seen. */
export const leastWatchedWeeks = 2;

/*
 * Limits of the two charts, chosen by simulation of 2,000 site-years so that both series together raise less than one false
 * flag a year, with nightly and with weekly logs; tests/soak/drift-watch.ts checks them on other seeds. Where logs come weekly,
 * a forecast's error lives on for days: the scores' own correlation tells of it, and moves the limit of a change of level up.
 */
const sdRatio = 1.25;
const limitPerCorrelation = 1.2;
const limits = {
  arrivals: { allowance: 0.8, level: 1.54, spread: 5.5 },
  need: { allowance: 1, level: 5, spread: 7 },
} as const;

/** What is held of the lag-1 correlation before scores tell, and how many scores that counts for. */
const priorCorrelation = { value: 0.2, scores: 30 };
const highestCorrelation = 0.9;
const lags = 3;
/** Weeks that the AR(1)'s variance of a weekly mean counts for beside that of the weekly means seen. */
const priorWeeks = 8;

/**
 * Watches the scores of one model for what chance does not explain, once a week: cumulative sums (Page 1954) of the weekly mean
 * of normal scores Φ⁻¹(PIT) in both directions, which rise when counts run above or below the forecast; and of the log
 * likelihood ratio of a standard deviation 1.25 times as large (intervals 20 % too narrow), as for a normal variance in Hawkins
 * & Olwell (1998, ch. 4). Weekly means are scaled by the variance that an AR(1) with the scores' own correlation gives; that
 * is taken from squared successive differences, which a change of level does not move (von Neumann et al. 1941).
 * A finding stands from its week on: what ends it is another model.
 * Cost: linear in the scores.
 */
export function watchDrift(series: readonly WatchedSeries[]): DriftReport {
  const findings = series.flatMap(({ name, scores }) => watchSeries(name, scores));
  const weeks = Math.max(0, ...series.map(({ scores }) => wholeWeeks(scores).length));
  return { weeks, findings: findings.sort((a, b) => a.week - b.week) };
}

function wholeWeeks(scores: readonly WatchedScore[]): WatchedScore[][] {
  const byWeek = new Map<number, WatchedScore[]>();
  for (const score of scores) {
    const own = byWeek.get(score.week);
    if (own) own.push(score);
    else byWeek.set(score.week, [score]);
  }
  return [...byWeek.values()].filter((own) => own.length >= leastPerWeek);
}

/** Φ⁻¹ of a PIT; the ends are held at ±3.9. */
function normalScore(pit: number): number {
  return normalQuantile(Math.min(1 - 5e-5, Math.max(5e-5, pit)));
}

/** Variance of the mean of n scores of variance 1 with correlations at lag 1, 2, … and none beyond. */
function meanVariance(n: number, correlations: readonly number[]): number {
  return correlations.reduce((sum, r, k) => sum + 2 * Math.max(0, 1 - (k + 1) / n) * r, 1) / n;
}

/** Learns the correlations of scores at short lags from squared differences, which a change of level hardly moves. */
function makeMemory(): { add: (z: number) => void; correlations: () => number[] } {
  const past: number[] = [];
  const squares = new Array<number>(lags).fill(0);
  const pairs = new Array<number>(lags).fill(0);
  return {
    add(z) {
      for (let k = 1; k <= Math.min(lags, past.length); k += 1) {
        squares[k - 1] += (z - past[past.length - k]) ** 2 / 2;
        pairs[k - 1] += 1;
      }
      past.push(z);
    },
    correlations: () =>
      squares.map((sum, k) => {
        const held = priorCorrelation.scores * priorCorrelation.value ** (k + 1);
        const found = (held + pairs[k] - sum) / (priorCorrelation.scores + pairs[k]);
        return Math.min(highestCorrelation, Math.max(0, found));
      }),
  };
}

function watchSeries(name: WatchedSeries['name'], scores: readonly WatchedScore[]): DriftFinding[] {
  const limit = limits[name];
  const weeks = wholeWeeks(scores);
  const findings: DriftFinding[] = [];
  const found = new Set<DriftFinding['kind']>();
  let [up, down, wide] = [0, 0, 0];
  let [upSince, downSince, wideSince] = [0, 0, 0];
  const memory = makeMemory();
  let [weekSquares, lastMean] = [0, 0];
  weeks.forEach((own, index) => {
    const z = own.map(({ pit }) => normalScore(pit));
    z.forEach(memory.add);
    const correlations = memory.correlations();
    const correlation = correlations[0];
    const mean = z.reduce((sum, value) => sum + value, 0) / z.length;
    const ofAr = meanVariance(z.length, correlations);
    if (index > 0) weekSquares += (mean - lastMean) ** 2 / 2;
    lastMean = mean;
    const variance = (priorWeeks * ofAr + weekSquares) / (priorWeeks + index);
    const scaled = mean / Math.sqrt(Math.max(ofAr, variance));
    if (up === 0) upSince = index;
    if (down === 0) downSince = index;
    if (wide === 0) wideSince = index;
    up = Math.max(0, up + scaled - limit.allowance);
    down = Math.max(0, down - scaled - limit.allowance);
    const ratio = z.reduce((sum, value) => sum + (value * value * (1 - sdRatio ** -2)) / 2 - Math.log(sdRatio), 0);
    wide = Math.max(0, wide + ratio * ((1 - correlation ** 2) / (1 + correlation ** 2)));
    if (index + 1 < leastWatchedWeeks) return;
    const tell = (kind: DriftFinding['kind'], since: number): void => {
      if (found.has(kind)) return;
      found.add(kind);
      const later = weeks.slice(since, index + 1).flat();
      const sum = (value: (score: WatchedScore) => number): number =>
        later.reduce((all, score) => all + value(score), 0);
      findings.push({
        series: name,
        kind,
        week: own[0].week,
        since: weeks[since][0].week,
        ratio:
          sum(({ observed }) => observed) /
          Math.max(
            1,
            sum(({ median }) => median),
          ),
      });
    };
    const bar = limit.level * (1 + limitPerCorrelation * correlation);
    if (up > bar) tell('more than forecast', upSince);
    if (down > bar) tell('fewer than forecast', downSince);
    if (wide > limit.spread) tell('ranges too narrow', wideSince);
  });
  return findings;
}
