import { checkCount, checkPositiveCount, checkProbability } from './check.ts';

/**
 * Counts of whole numbers 0, 1, 2, … from many replications, and the percentiles and chances read from them.
 * `add` is meant for hot loops: one comparison and one addition, growing (by doubling) only on a new maximum.
 */
export class Histogram {
  private counts: Int32Array;
  private sum = 0;
  private highest = -1;

  /** @param capacity whole numbers to make room for at first. @throws RangeError unless it is 1 or more. */
  constructor(capacity = 64) {
    checkPositiveCount('capacity', capacity);
    this.counts = new Int32Array(capacity);
  }

  /** Sum of the weights. */
  get total(): number {
    return this.sum;
  }

  /** The largest number with any weight; −1 when empty. */
  get max(): number {
    return this.highest;
  }

  /** Adds a whole number n ≥ 0 with a whole weight ≥ 0. @throws RangeError on anything else. */
  add(n: number, weight = 1): void {
    if (n >= this.counts.length) this.grow(n);
    if (!(n >= 0) || n !== Math.floor(n)) throw new RangeError(`n must be a whole number, 0 or more, got ${n}`);
    if (!(weight >= 0) || weight !== Math.floor(weight)) {
      throw new RangeError(`weight must be a whole number, 0 or more, got ${weight}`);
    }
    this.counts[n] += weight;
    this.sum += weight;
    if (n > this.highest && weight > 0) this.highest = n;
  }

  private grow(n: number): void {
    checkCount('n', n);
    const grown = new Int32Array(Math.max(n + 1, 2 * this.counts.length));
    grown.set(this.counts);
    this.counts = grown;
  }

  /** Weight of exactly n. */
  count(n: number): number {
    return this.counts[n] ?? 0;
  }

  /** The smallest n with P(N ≤ n) ≥ p. @throws RangeError on a bad p or an empty histogram. Cost: linear in max. */
  quantile(p: number): number {
    checkProbability('p', p);
    this.checkFilled();
    // A product like 0.9 × 10 may land just above the whole number that it means.
    const target = p * this.sum * (1 - 4 * Number.EPSILON);
    let cumulative = 0;
    for (let n = 0; n < this.highest; n += 1) {
      cumulative += this.counts[n];
      if (cumulative >= target && cumulative > 0) return n;
    }
    return this.highest;
  }

  /** P(N > b): the share above b. @throws RangeError on NaN or an empty histogram. */
  exceedance(b: number): number {
    if (Number.isNaN(b)) throw new RangeError('b must be a number, got NaN');
    this.checkFilled();
    let above = 0;
    for (let n = Math.max(0, Math.floor(b) + 1); n <= this.highest; n += 1) above += this.counts[n];
    return above / this.sum;
  }

  /** P(N ≤ n). */
  cdf(n: number): number {
    return 1 - this.exceedance(n);
  }

  /** The mean. @throws RangeError on an empty histogram. */
  get mean(): number {
    this.checkFilled();
    let sum = 0;
    for (let n = 1; n <= this.highest; n += 1) sum += n * this.counts[n];
    return sum / this.sum;
  }

  /** The variance with denominator `total`. @throws RangeError on an empty histogram. */
  get variance(): number {
    const mean = this.mean;
    let sum = 0;
    for (let n = 0; n <= this.highest; n += 1) sum += (n - mean) * (n - mean) * this.counts[n];
    return sum / this.sum;
  }

  /** Adds another histogram's weights to this one. */
  merge(other: Histogram): void {
    for (let n = 0; n <= other.highest; n += 1) if (other.counts[n] > 0) this.add(n, other.counts[n]);
  }

  /** Empties it, keeping its room. */
  clear(): void {
    this.counts.fill(0);
    this.sum = 0;
    this.highest = -1;
  }

  /** Weights of 0 .. max, copied: to send to another thread or to keep. */
  toCounts(): Int32Array {
    return this.counts.slice(0, this.highest + 1);
  }

  /** The histogram of weights made by `toCounts`. */
  static fromCounts(counts: ArrayLike<number>): Histogram {
    const histogram = new Histogram(Math.max(1, counts.length));
    for (let n = 0; n < counts.length; n += 1) histogram.add(n, counts[n]);
    return histogram;
  }

  private checkFilled(): void {
    if (this.sum === 0) throw new RangeError('the histogram is empty');
  }
}
