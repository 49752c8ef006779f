import { checkNonNegative, checkPositive } from './check.ts';
import { chiSquareExceedance } from './gamma.ts';
import { kolmogorovPValue, kolmogorovStatistic } from './kolmogorov.ts';
import type { RandomStream } from './random.ts';

export interface DispersionTest {
  /** (n − 1) variance / mean, summed over groups. */
  statistic: number;
  df: number;
  /** statistic / df: 1 for Poisson counts, above 1 for counts that vary more. The effect size. */
  index: number;
  /** Chance of so large a statistic from Poisson counts. */
  p: number;
}

export interface UniformityTest {
  /** Events tested. */
  n: number;
  /** Kolmogorov–Smirnov distance. The effect size. */
  statistic: number;
  p: number;
}

/**
 * The dispersion (variance) test: are these counts, taken over equal exposures, as variable as Poisson counts with
 * one common mean? Fisher's Σ (x − x̄)² / x̄ on n − 1 degrees of freedom; the p-value is for variance beyond Poisson.
 * @throws RangeError on a negative count, fewer than 2 counts, or no events at all.
 */
export function dispersionTest(counts: ArrayLike<number>): DispersionTest {
  return pooledDispersionTest([counts]);
}

/**
 * The dispersion test over groups that may each have a mean of their own (say one group per hour of week): statistics
 * and degrees of freedom add up. Groups with fewer than 2 counts or without events say nothing and are left out.
 * @throws RangeError on a negative count or when no group can be used.
 */
export function pooledDispersionTest(groups: readonly ArrayLike<number>[]): DispersionTest {
  let statistic = 0;
  let df = 0;
  for (const counts of groups) {
    let sum = 0;
    for (let i = 0; i < counts.length; i += 1) {
      checkNonNegative(`count ${i}`, counts[i]);
      sum += counts[i];
    }
    if (counts.length < 2 || sum === 0) continue;
    const mean = sum / counts.length;
    for (let i = 0; i < counts.length; i += 1) statistic += (counts[i] - mean) ** 2 / mean;
    df += counts.length - 1;
  }
  if (df === 0) throw new RangeError('counts must hold a group of 2 or more with at least one event');
  return { statistic, df, index: statistic / df, p: chiSquareExceedance(statistic, df) };
}

function checkTimes(times: ArrayLike<number>, breaks: ArrayLike<number>): void {
  if (breaks.length < 2) throw new RangeError(`breaks must be 2 or more, got ${breaks.length}`);
  for (let i = 1; i < breaks.length; i += 1) {
    if (!(breaks[i] > breaks[i - 1]))
      throw new RangeError(`breaks must ascend, got ${breaks[i]} after ${breaks[i - 1]}`);
  }
  for (let i = 0; i < times.length; i += 1) {
    if (!(i === 0 || times[i] >= times[i - 1])) throw new RangeError(`times must ascend, got ${times[i]} at ${i}`);
    if (!(times[i] >= breaks[0] && times[i] <= breaks[breaks.length - 1])) {
      throw new RangeError(`times must lie within the breaks, got ${times[i]}`);
    }
  }
  if (times.length === 0) throw new RangeError('times must not be empty');
}

/** Calls back with each interval's events; an event on a break belongs to the later interval, on the last to the last. */
function eachInterval(
  times: ArrayLike<number>,
  breaks: ArrayLike<number>,
  visit: (first: number, end: number, from: number, to: number) => void,
): void {
  let first = 0;
  for (let i = 0; i + 1 < breaks.length; i += 1) {
    const last = i + 2 === breaks.length;
    let end = first;
    while (end < times.length && (last || times[end] < breaks[i + 1])) end += 1;
    visit(first, end, breaks[i], breaks[i + 1]);
    first = end;
  }
}

function testUniform(values: Float64Array): UniformityTest {
  values.sort();
  const statistic = kolmogorovStatistic(values);
  return { n: values.length, statistic, p: kolmogorovPValue(statistic, values.length) };
}

function conditionalUniforms(times: ArrayLike<number>, breaks: ArrayLike<number>): Float64Array {
  const uniforms = new Float64Array(times.length);
  eachInterval(times, breaks, (first, end, from, to) => {
    for (let i = first; i < end; i += 1) uniforms[i] = (times[i] - from) / (to - from);
  });
  return uniforms;
}

/**
 * Conditional-uniform Kolmogorov–Smirnov test: given their number, the events of a Poisson process whose rate is
 * constant on each interval are spread evenly over it; the positions within the intervals are pooled and compared with
 * the uniform law. Conditioning on the counts removes differences of rate between intervals (and with them any
 * variation from day to day: pair it with the dispersion test; Kim & Whitt 2014).
 * @param times ascending event times; @param breaks ascending ends of the intervals, the same unit.
 * @throws RangeError on times or breaks out of order, times outside, or none. Cost: O(n log n) and the p-value's.
 */
export function conditionalUniformTest(times: ArrayLike<number>, breaks: ArrayLike<number>): UniformityTest {
  checkTimes(times, breaks);
  return testUniform(conditionalUniforms(times, breaks));
}

/**
 * Lewis's form (Lewis 1965, after Durbin 1961): the gaps between the conditional uniforms are sorted and turned into
 * new uniforms, Σ (n + 2 − j)(g₍ⱼ₎ − g₍ⱼ₋₁₎). More sensitive to gaps that are not exponential, such as those left by
 * rounding or batches. Same parameters and errors as the conditional-uniform test.
 */
export function lewisTest(times: ArrayLike<number>, breaks: ArrayLike<number>): UniformityTest {
  checkTimes(times, breaks);
  const uniforms = conditionalUniforms(times, breaks).sort();
  const n = uniforms.length;
  const gaps = new Float64Array(n + 1);
  for (let i = 0; i <= n; i += 1) gaps[i] = (i === n ? 1 : uniforms[i]) - (i === 0 ? 0 : uniforms[i - 1]);
  gaps.sort();
  const transformed = new Float64Array(n);
  let sum = 0;
  for (let j = 0; j < n; j += 1) {
    sum += (n + 1 - j) * (gaps[j] - (j === 0 ? 0 : gaps[j - 1]));
    transformed[j] = Math.min(1, sum);
  }
  return testUniform(transformed);
}

/**
 * The log form (Brown et al. 2005, JASA 100, 36): within each interval of end T holding n events,
 * X_j = −(n + 1 − j) ln((T − t_j) / (T − t_{j−1})) are independent exponentials of mean 1; they are pooled and compared
 * with that law. Same parameters and errors as the conditional-uniform test.
 */
export function logTest(times: ArrayLike<number>, breaks: ArrayLike<number>): UniformityTest {
  checkTimes(times, breaks);
  const uniforms = new Float64Array(times.length);
  eachInterval(times, breaks, (first, end, from, to) => {
    let before = from;
    for (let i = first; i < end; i += 1) {
      // 1 − e^{−X} with X = −(events from this one on) × ln(ratio of the times left).
      uniforms[i] = before >= to ? 0 : -Math.expm1((end - i) * Math.log((to - times[i]) / (to - before)));
      before = times[i];
    }
  });
  return testUniform(uniforms);
}

/** Ends of `count` equal intervals from `from` to `to`: count + 1 breaks. */
export function equalBreaks(from: number, to: number, count: number): Float64Array {
  checkPositive('to − from', to - from);
  checkPositive('count', count);
  return Float64Array.from({ length: Math.floor(count) + 1 }, (_, i) => from + ((to - from) * i) / Math.floor(count));
}

/**
 * Undoes rounding before a test (Brown et al. 2005; Kim & Whitt 2014): rounded times pile up on the grid and every
 * form of the test rejects them; each time is moved to a uniform place within the width that it was rounded from.
 * @param width of the rounding, in the unit of the times. @param rounding 'down' moves up by 0..width; 'nearest' by
 * −width/2 .. width/2. @returns ascending times. @throws RangeError unless width is above 0.
 */
export function unround(
  stream: RandomStream,
  times: ArrayLike<number>,
  width: number,
  rounding: 'down' | 'nearest' = 'down',
): Float64Array {
  checkPositive('width', width);
  const shift = rounding === 'down' ? 0 : -width / 2;
  return Float64Array.from(times, (time) => time + shift + width * stream.uniform()).sort();
}
