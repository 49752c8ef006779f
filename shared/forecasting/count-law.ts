import { binomialPmf } from '../stochastic/binomial.ts';
import { gammaPoissonPmf } from '../stochastic/gamma-poisson.ts';

/**
 * A law of counts kept only where it matters: `pmf[i]` is the chance of first + i. Chances below 1e-12 of the highest
 * are left out, so that a hundred thousand laws an answer cost milliseconds.
 */
export interface CountLaw {
  first: number;
  pmf: Float64Array;
}

const negligible = 1e-12;
let below = new Float64Array(512);
let above = new Float64Array(512);

function grown(room: Float64Array): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(2 * room.length);
  larger.set(room);
  return larger;
}

/** Joins terms below the mode (nearest first), the mode and terms above it. */
function joined(mode: number, height: number, lower: number, upper: number): CountLaw {
  const pmf = new Float64Array(lower + 1 + upper);
  for (let i = 0; i < lower; i += 1) pmf[lower - 1 - i] = below[i];
  pmf[lower] = height;
  for (let i = 0; i < upper; i += 1) pmf[lower + 1 + i] = above[i];
  return { first: mode - lower, pmf };
}

/** The gamma–Poisson law: Poisson with a gamma factor of mean 1 and variance φ on its mean; φ = 0 is the Poisson law. */
export function gammaPoissonLaw(mean: number, phi: number): CountLaw {
  if (!(mean > 0)) return { first: 0, pmf: new Float64Array([1]) };
  const mode = phi < 1 ? Math.floor(mean * (1 - phi)) : 0;
  const height = gammaPoissonPmf(mode, mean, phi);
  const least = negligible * height;
  const ratio = mean / (1 + mean * phi);
  let upper = 0;
  for (let n = mode, term = height; ; n += 1) {
    term *= ((1 + n * phi) * ratio) / (n + 1);
    if (!(term > least)) break;
    if (upper === above.length) above = grown(above);
    above[upper] = term;
    upper += 1;
  }
  let lower = 0;
  for (let n = mode, term = height; n > 0; n -= 1) {
    term *= n / ((1 + (n - 1) * phi) * ratio);
    if (!(term > least)) break;
    if (lower === below.length) below = grown(below);
    below[lower] = term;
    lower += 1;
  }
  return joined(mode, height, lower, upper);
}

/** The binomial law. */
export function binomialLaw(patients: number, chance: number): CountLaw {
  if (!(patients * chance > negligible)) return { first: 0, pmf: new Float64Array([1]) };
  if (chance >= 1) return { first: patients, pmf: new Float64Array([1]) };
  const mode = Math.min(patients, Math.floor((patients + 1) * chance));
  const height = binomialPmf(mode, patients, chance);
  const least = negligible * height;
  const odds = chance / (1 - chance);
  let upper = 0;
  for (let n = mode, term = height; n < patients; n += 1) {
    term *= ((patients - n) * odds) / (n + 1);
    if (!(term > least)) break;
    if (upper === above.length) above = grown(above);
    above[upper] = term;
    upper += 1;
  }
  let lower = 0;
  for (let n = mode, term = height; n > 0; n -= 1) {
    term *= n / ((patients - n + 1) * odds);
    if (!(term > least)) break;
    if (lower === below.length) below = grown(below);
    below[lower] = term;
    lower += 1;
  }
  return joined(mode, height, lower, upper);
}

/** The law of the sum of two independent counts. */
export function sumOfLaws(a: CountLaw, b: CountLaw): CountLaw {
  if (a.pmf.length === 1 && a.pmf[0] === 1) return { first: a.first + b.first, pmf: b.pmf };
  if (b.pmf.length === 1 && b.pmf[0] === 1) return { first: a.first + b.first, pmf: a.pmf };
  const [wide, narrow] = a.pmf.length >= b.pmf.length ? [a.pmf, b.pmf] : [b.pmf, a.pmf];
  const pmf = new Float64Array(wide.length + narrow.length - 1);
  for (let j = 0; j < narrow.length; j += 1) {
    const weight = narrow[j];
    for (let i = 0; i < wide.length; i += 1) pmf[i + j] += weight * wide[i];
  }
  return trimmed({ first: a.first + b.first, pmf });
}

function trimmed(law: CountLaw): CountLaw {
  const { pmf } = law;
  let highest = 0;
  for (let i = 0; i < pmf.length; i += 1) if (pmf[i] > highest) highest = pmf[i];
  const least = negligible * highest;
  let from = 0;
  let to = pmf.length;
  while (from < to - 1 && !(pmf[from] > least)) from += 1;
  while (to > from + 1 && !(pmf[to - 1] > least)) to -= 1;
  return from === 0 && to === pmf.length ? law : { first: law.first + from, pmf: pmf.subarray(from, to) };
}

/**
 * The mixture of sums of two independent counts each, as an array from 0 on: entry n is the chance of n. Weights sum to 1.
 * Each sum is added straight into the result, which spares an array a part.
 */
export function mixtureOfSums(parts: readonly { weight: number; a: CountLaw; b: CountLaw }[]): Float64Array {
  let length = 0;
  for (const { a, b } of parts) length = Math.max(length, a.first + a.pmf.length + b.first + b.pmf.length - 1);
  const all = new Float64Array(length);
  for (const { weight, a, b } of parts) {
    const [wide, narrow] = a.pmf.length >= b.pmf.length ? [a.pmf, b.pmf] : [b.pmf, a.pmf];
    const last = wide.length;
    for (let j = 0; j < narrow.length; j += 1) {
      const share = weight * narrow[j];
      const first = a.first + b.first + j;
      for (let i = 0; i < last; i += 1) all[first + i] += share * wide[i];
    }
  }
  return all;
}
