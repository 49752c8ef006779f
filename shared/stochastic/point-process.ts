import { checkNonNegative } from './check.ts';
import { drawExponential } from './exponential.ts';
import type { RandomStream } from './random.ts';

function checkInterval(from: number, to: number): void {
  if (!(Number.isFinite(from) && Number.isFinite(to) && to >= from)) {
    throw new RangeError(`to must be finite and not before from, got from ${from}, to ${to}`);
  }
}

/**
 * Event times of a Poisson process of constant rate in [from, to): gaps −ln(1 − U) / rate. Ascending.
 * @throws RangeError on a bad rate or interval. Cost: O(expected events).
 */
export function drawTimesAtConstantRate(stream: RandomStream, rate: number, from: number, to: number): number[] {
  checkNonNegative('rate', rate);
  checkInterval(from, to);
  const times: number[] = [];
  if (rate === 0) return times;
  for (let t = from + drawExponential(stream) / rate; t < to; t += drawExponential(stream) / rate) times.push(t);
  return times;
}

/**
 * Event times of a Poisson process whose rate is constant between breaks, by inversion of the cumulative rate
 * (Çinlar 1975): unit-rate gaps are spent piece by piece, and an unspent rest carries over into the next piece.
 * @param breaks ascending times, one more than rates; rates[i] holds from breaks[i] up to breaks[i + 1], in events per
 * the unit of the breaks. @returns ascending times. @throws RangeError naming the bad break or rate.
 * Cost: O(pieces + expected events), one uniform an event.
 */
export function drawTimesByInversion(
  stream: RandomStream,
  breaks: ArrayLike<number>,
  rates: ArrayLike<number>,
): number[] {
  if (breaks.length !== rates.length + 1) {
    throw new RangeError(`breaks must be one more than rates, got ${breaks.length} and ${rates.length}`);
  }
  for (let i = 0; i < rates.length; i += 1) {
    checkNonNegative(`rates[${i}]`, rates[i]);
    checkInterval(breaks[i], breaks[i + 1]);
  }
  const times: number[] = [];
  let gap = drawExponential(stream);
  for (let i = 0; i < rates.length; i += 1) {
    const rate = rates[i];
    const end = breaks[i + 1];
    let t = breaks[i];
    let left = rate * (end - t);
    while (gap < left) {
      left -= gap;
      t += gap / rate;
      if (t < end) times.push(t);
      gap = drawExponential(stream);
    }
    gap -= left;
  }
  return times;
}

/**
 * Event times in [from, to) of a Poisson process with any bounded rate, by thinning (Lewis & Shedler 1979, Naval
 * Research Logistics Quarterly 26, 403): candidates at the highest rate, each kept with chance rate / highest.
 * @throws RangeError on a bad interval, or where the rate leaves 0..highestRate (naming the time).
 * Cost: O(highestRate × length), two uniforms a candidate.
 */
export function drawTimesByThinning(
  stream: RandomStream,
  rateAt: (t: number) => number,
  highestRate: number,
  from: number,
  to: number,
): number[] {
  checkNonNegative('highestRate', highestRate);
  checkInterval(from, to);
  const times: number[] = [];
  if (highestRate === 0) return times;
  for (let t = from + drawExponential(stream) / highestRate; t < to; t += drawExponential(stream) / highestRate) {
    const rate = rateAt(t);
    if (!(rate >= 0 && rate <= highestRate)) {
      throw new RangeError(`rate at ${t} must lie in 0..highestRate (${highestRate}), got ${rate}`);
    }
    if (stream.uniform() * highestRate < rate) times.push(t);
  }
  return times;
}
