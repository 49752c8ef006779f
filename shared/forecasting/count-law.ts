import { binomialPmf } from '../stochastic/binomial.ts';
import { gammaPoissonPmf } from '../stochastic/gamma-poisson.ts';

/**
 * A law of counts kept only where it matters: `pmf[i]` is the chance of first + i. Chances below 1e-15 of the highest
 * are left out, so that a hundred thousand laws an answer cost milliseconds.
 */
export interface CountLaw {
  first: number;
  pmf: Float64Array;
}

const negligible = 1e-15;
let room = new Float64Array(1024);

/** Terms outward from the mode by the ratio of neighbours, until negligible; into `room`, then copied out. */
function outward(
  mode: number,
  height: number,
  most: number,
  up: (n: number) => number,
  down: (n: number) => number,
): CountLaw {
  const least = negligible * height;
  let first = mode;
  for (let n = mode, term = height; n > 0; n -= 1) {
    term *= down(n);
    if (!(term > least)) break;
    first = n - 1;
    if (mode - first >= room.length) room = grown(mode - first);
    room[mode - first] = term;
  }
  const below = mode - first;
  const head = room.slice(0, below + 1);
  let last = mode;
  for (let n = mode, term = height; n < most; n += 1) {
    term *= up(n);
    if (!(term > least)) break;
    last = n + 1;
    if (last - mode >= room.length) room = grown(last - mode);
    room[last - mode] = term;
  }
  const pmf = new Float64Array(last - first + 1);
  for (let i = 1; i <= below; i += 1) pmf[below - i] = head[i];
  pmf[below] = height;
  for (let i = 1; i <= last - mode; i += 1) pmf[below + i] = room[i];
  return { first, pmf };
}

function grown(least: number): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(2 * Math.max(least, room.length));
  larger.set(room);
  return larger;
}

/** The gamma–Poisson law: Poisson with a gamma factor of mean 1 and variance φ on its mean; φ = 0 is the Poisson law. */
export function gammaPoissonLaw(mean: number, phi: number): CountLaw {
  if (!(mean > 0)) return { first: 0, pmf: new Float64Array([1]) };
  const mode = phi < 1 ? Math.floor(mean * (1 - phi)) : 0;
  const spread = (1 + mean * phi) / mean;
  return outward(
    mode,
    gammaPoissonPmf(mode, mean, phi),
    1e7,
    (n) => (1 + n * phi) / ((n + 1) * spread),
    (n) => (n * spread) / (1 + (n - 1) * phi),
  );
}

/** The binomial law. */
export function binomialLaw(patients: number, chance: number): CountLaw {
  if (!(chance > 0)) return { first: 0, pmf: new Float64Array([1]) };
  if (chance >= 1) return { first: patients, pmf: new Float64Array([1]) };
  const mode = Math.min(patients, Math.floor((patients + 1) * chance));
  const odds = chance / (1 - chance);
  return outward(
    mode,
    binomialPmf(mode, patients, chance),
    patients,
    (n) => ((patients - n) * odds) / (n + 1),
    (n) => n / ((patients - n + 1) * odds),
  );
}

/** The law of the sum of two independent counts. */
export function sumOfLaws(a: CountLaw, b: CountLaw): CountLaw {
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

/** The mixture of laws, as an array from 0 on: entry n is the chance of n. Weights sum to 1. */
export function mixtureFromZero(parts: readonly { weight: number; law: CountLaw }[]): Float64Array {
  let length = 0;
  for (const { law } of parts) length = Math.max(length, law.first + law.pmf.length);
  const all = new Float64Array(length);
  for (const { weight, law } of parts) {
    const { first, pmf } = law;
    for (let i = 0; i < pmf.length; i += 1) all[first + i] += weight * pmf[i];
  }
  return all;
}
