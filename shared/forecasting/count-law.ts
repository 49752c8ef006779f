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

/**
 * A law of counts in a room that is used again: values[from .. to − 1] are the chances of first, first + 1, … Loops over
 * thousands of laws make no garbage this way.
 */
export interface LawRoom {
  values: Float64Array;
  from: number;
  to: number;
  first: number;
}

/** An empty room. */
export function makeLawRoom(): LawRoom {
  return { values: new Float64Array(1024), from: 0, to: 0, first: 0 };
}

/** Doubles a room around its middle. */
function widen(room: LawRoom): void {
  const wider = new Float64Array(2 * room.values.length);
  wider.set(room.values, room.values.length / 2);
  room.values = wider;
}

function onePoint(room: LawRoom, count: number): void {
  room.values[0] = 1;
  room.from = 0;
  room.to = 1;
  room.first = count;
}

/** Puts the gamma–Poisson law into a room: from its mode outwards, by the ratio of neighbouring terms. */
export function putGammaPoisson(room: LawRoom, mean: number, phi: number): void {
  if (!(mean > 0)) {
    onePoint(room, 0);
    return;
  }
  const mode = phi < 1 ? Math.floor(mean * (1 - phi)) : 0;
  const height = gammaPoissonPmf(mode, mean, phi);
  const least = negligible * height;
  const ratio = mean / (1 + mean * phi);
  let { values } = room;
  let middle = values.length >> 1;
  values[middle] = height;
  let upper = 1;
  for (let n = mode, term = height; ; n += 1, upper += 1) {
    term *= ((1 + n * phi) * ratio) / (n + 1);
    if (!(term > least)) break;
    if (middle + upper >= values.length) {
      widen(room);
      ({ values } = room);
      middle = values.length >> 1;
    }
    values[middle + upper] = term;
  }
  let lower = 0;
  for (let n = mode, term = height; n > 0; n -= 1) {
    term *= n / ((1 + (n - 1) * phi) * ratio);
    if (!(term > least)) break;
    lower += 1;
    if (lower > middle) {
      widen(room);
      ({ values } = room);
      middle = values.length >> 1;
    }
    values[middle - lower] = term;
  }
  room.from = middle - lower;
  room.to = middle + upper;
  room.first = mode - lower;
}

/** Puts the binomial law into a room. */
export function putBinomial(room: LawRoom, patients: number, chance: number): void {
  if (!(patients * chance > negligible) || chance >= 1) {
    onePoint(room, chance >= 1 ? patients : 0);
    return;
  }
  const mode = Math.min(patients, Math.floor((patients + 1) * chance));
  const height = binomialPmf(mode, patients, chance);
  const least = negligible * height;
  const odds = chance / (1 - chance);
  let { values } = room;
  let middle = values.length >> 1;
  values[middle] = height;
  let upper = 1;
  for (let n = mode, term = height; n < patients; n += 1, upper += 1) {
    term *= ((patients - n) * odds) / (n + 1);
    if (!(term > least)) break;
    if (middle + upper >= values.length) {
      widen(room);
      ({ values } = room);
      middle = values.length >> 1;
    }
    values[middle + upper] = term;
  }
  let lower = 0;
  for (let n = mode, term = height; n > 0; n -= 1) {
    term *= n / ((patients - n + 1) * odds);
    if (!(term > least)) break;
    lower += 1;
    if (lower > middle) {
      widen(room);
      ({ values } = room);
      middle = values.length >> 1;
    }
    values[middle - lower] = term;
  }
  room.from = middle - lower;
  room.to = middle + upper;
  room.first = mode - lower;
}

/** Puts a law into a room as it stands. */
export function putLaw(room: LawRoom, law: CountLaw): void {
  while (room.values.length < law.pmf.length) widen(room);
  room.values.set(law.pmf);
  room.from = 0;
  room.to = law.pmf.length;
  room.first = law.first;
}

const spare = makeLawRoom();

function taken(room: LawRoom): CountLaw {
  return { first: room.first, pmf: room.values.slice(room.from, room.to) };
}

/** The gamma–Poisson law: Poisson with a gamma factor of mean 1 and variance φ on its mean; φ = 0 is the Poisson law. */
export function gammaPoissonLaw(mean: number, phi: number): CountLaw {
  putGammaPoisson(spare, mean, phi);
  return taken(spare);
}

/** The binomial law. */
export function binomialLaw(patients: number, chance: number): CountLaw {
  putBinomial(spare, patients, chance);
  return taken(spare);
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

/** Adds weight times the law of the sum of two independent counts into chances from 0 on, which must have the room. */
export function addSum(chances: Float64Array, weight: number, a: LawRoom, b: LawRoom): void {
  const aIsWide = a.to - a.from >= b.to - b.from;
  const wide = aIsWide ? a : b;
  const narrow = aIsWide ? b : a;
  const from = wide.from;
  const count = wide.to - from;
  const values = wide.values;
  for (let j = narrow.from; j < narrow.to; j += 1) {
    const share = weight * narrow.values[j];
    const to = a.first + b.first + j - narrow.from;
    for (let i = 0; i < count; i += 1) chances[to + i] += share * values[from + i];
  }
}

/** Entries that the law of the sum needs, from 0 on. */
export function lengthOfSum(a: LawRoom, b: LawRoom): number {
  return a.first + (a.to - a.from) + b.first + (b.to - b.from) - 1;
}
