/** A week from which on clearly more or fewer patients arrive than before. Means are arrivals a week. */
export interface LevelShift {
  /** Place in the series of weeks. */
  week: number;
  before: number;
  after: number;
}

/** Weeks compared on either side. */
const side = 4;
/** Median of a chi-squared law with one degree of freedom (R: qchisq(0.5, 1)). */
const medianChiSquared = 0.454936;
const leastScore = 5;
const leastChange = 0.15;

/**
 * Sudden changes of level in weekly totals. The four weeks before each boundary are compared with the
 * four after it: z = (after − before) / sqrt(φ (before + after) / 4), with φ the totals' variance over
 * that of Poisson counts. Two Poisson totals of one level have (y − x)² / (x + y) near a chi-squared law
 * of one degree of freedom, so φ is the median of that over neighbouring weeks divided by the law's
 * median, at least 1; a median, so that the shifts themselves hardly count. Reported from |z| = 5 and a
 * change of 15 %, the clearest first and none within four weeks of a clearer one.
 * @param totals arrivals of whole weeks, in order; NaN for a week that is not whole
 * @returns in order of weeks; none from fewer than eight whole weeks. Cost: linear.
 */
export function findLevelShifts(totals: readonly number[]): LevelShift[] {
  const weeks = totals.map((total, week) => ({ total, week })).filter(({ total }) => !Number.isNaN(total));
  if (weeks.length < 2 * side) return [];
  const ratios = weeks
    .slice(1)
    .map(({ total }, index) => {
      const sum = total + weeks[index].total;
      return sum === 0 ? 0 : (total - weeks[index].total) ** 2 / sum;
    })
    .sort((a, b) => a - b);
  const spread = Math.max(1, ratios[Math.floor(ratios.length / 2)] / medianChiSquared);
  const mean = (from: number) => weeks.slice(from, from + side).reduce((sum, { total }) => sum + total, 0) / side;
  const candidates: (LevelShift & { score: number; at: number })[] = [];
  for (let at = side; at + side <= weeks.length; at += 1) {
    const before = mean(at - side);
    const after = mean(at);
    const score = Math.abs(after - before) / Math.sqrt((spread * Math.max(1, before + after)) / side);
    if (score >= leastScore && Math.abs(after - before) >= leastChange * before)
      candidates.push({ week: weeks[at].week, before, after, score, at });
  }
  candidates.sort((a, b) => b.score - a.score);
  const found: typeof candidates = [];
  for (const candidate of candidates)
    if (found.every(({ at }) => Math.abs(at - candidate.at) >= side)) found.push(candidate);
  return found.sort((a, b) => a.week - b.week).map(({ week, before, after }) => ({ week, before, after }));
}
