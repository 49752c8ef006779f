/** A row of past counts as it may be shown: null stands for a count that is kept back. */
export interface SuppressedRow {
  counts: (number | null)[];
  /** Null where the row's sum would tell too much. */
  total: number | null;
}

/**
 * Keeps back past counts of people that are below a minimum, so that the sum of the row cannot give them away: whoever knows
 * the rule, the shown counts and the total still finds at least two values possible for every count that is kept back.
 * Counts below the minimum go first (a nought is such a count: it would say that nobody did). Then the smallest of the others
 * follow until at least two are kept back, those kept back add up to the minimum, and their sum does not force each of them;
 * where that cannot be, the total is kept back too. After Cox, "Suppression methodology and statistical disclosure control", JASA 75 (1980): complementary suppression.
 * @param counts whole numbers of people, in any order
 * @param minimum smallest count that may be shown; 0 or 1 shows everything
 */
export function suppressSmall(counts: readonly number[], minimum: number): SuppressedRow {
  if (counts.some((count) => !Number.isInteger(count) || count < 0)) {
    throw new RangeError('counts must be whole numbers from 0');
  }
  const total = counts.reduce((sum, count) => sum + count, 0);
  if (!(minimum > 1)) return { counts: [...counts], total };
  const hidden = counts.map((count) => count < minimum);
  if (!hidden.includes(true)) return { counts: [...counts], total };
  const enough = () => {
    const kept = counts.filter((_, index) => hidden[index]);
    // All small and as large as small counts can be: their sum alone would tell each of them.
    const told = kept.every((count) => count === minimum - 1);
    return kept.length >= 2 && kept.reduce((sum, count) => sum + count, 0) >= minimum && !told;
  };
  while (!enough()) {
    const shown = counts.filter((_, index) => !hidden[index]);
    if (shown.length === 0) return { counts: counts.map(() => null), total: null };
    // Equal ones go together: which of them went would tell on the others.
    const smallest = Math.min(...shown);
    counts.forEach((count, index) => {
      if (count === smallest) hidden[index] = true;
    });
  }
  return { counts: counts.map((count, index) => (hidden[index] ? null : count)), total };
}

/**
 * An average of past counts as it may be shown: a whole number, so that two averages that share all but one week do not give
 * that week's count away; null below the minimum.
 */
export function suppressAverage(average: number, minimum: number): number | null {
  const rounded = Math.round(average);
  return rounded < minimum ? null : rounded;
}
