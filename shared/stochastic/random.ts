/** A source of randomness. Handed to everything that draws; nothing in this folder has one of its own. */
export interface RandomStream {
  /** Uniform on the open interval (0, 1), 53 bits. */
  uniform(): number;
  /** Uniform on 0 .. 2³² − 1. */
  uint32(): number;
}

/** A stream that can be set to another seed and path in place, so that a hot loop makes no garbage. */
export interface SeededStream extends RandomStream {
  reseed(seed: number, ...path: number[]): void;
}

/** h += 0x9e3779b97f4a7c15 (the golden ratio), on [low, high] halves. */
function step(h: Int32Array): void {
  const low = h[0] >>> 0;
  const sum = low + 0x7f4a7c15;
  h[0] = sum | 0;
  h[1] = (h[1] + 0x9e3779b9 + (sum > 0xffffffff ? 1 : 0)) | 0;
}

/** out = h · (high, low) mod 2⁶⁴, where h = (h1, h0): schoolbook on 16-bit halves for the carry out of the low words. */
function multiply(h: Int32Array, high: number, low: number): void {
  const a = h[0];
  const a0 = a & 0xffff;
  const a1 = a >>> 16;
  const b0 = low & 0xffff;
  const b1 = low >>> 16;
  const cross = a1 * b0;
  const other = a0 * b1;
  const middle = ((a0 * b0) >>> 16) + (cross & 0xffff) + (other & 0xffff);
  const carried = a1 * b1 + (cross >>> 16) + (other >>> 16) + (middle >>> 16);
  h[1] = (carried + Math.imul(h[1], low) + Math.imul(a, high)) | 0;
  h[0] = Math.imul(a, low);
}

/** h ^= h >>> bits, 0 < bits < 32. */
function fold(h: Int32Array, bits: number): void {
  h[0] ^= (h[0] >>> bits) | (h[1] << (32 - bits));
  h[1] ^= h[1] >>> bits;
}

/** SplitMix64's output function. */
function mix(h: Int32Array): void {
  fold(h, 30);
  multiply(h, 0xbf58476d, 0x1ce4e5b9);
  fold(h, 27);
  multiply(h, 0x94d049bb, 0x133111eb);
  fold(h, 31);
}

const hash = new Int32Array(2);
const output = new Int32Array(2);

function highWord(value: number): number {
  return Math.floor(value / 4294967296) | 0;
}

class Xoshiro128StarStar implements SeededStream {
  private readonly state: Int32Array;

  constructor(state: Int32Array) {
    this.state = state;
  }

  reseed(seed: number, ...path: number[]): void {
    if (!Number.isSafeInteger(seed)) throw new RangeError(`seed must be a safe whole number, got ${seed}`);
    hash[0] = seed | 0;
    hash[1] = highWord(seed);
    for (let i = 0; i < path.length; i += 1) {
      const word = path[i];
      if (!Number.isSafeInteger(word)) throw new RangeError(`path[${i}] must be a safe whole number, got ${word}`);
      step(hash);
      mix(hash);
      hash[0] ^= word | 0;
      hash[1] ^= highWord(word);
    }
    const state = this.state;
    for (let i = 0; i < 4; i += 2) {
      step(hash);
      output[0] = hash[0];
      output[1] = hash[1];
      mix(output);
      state[i] = output[0];
      state[i + 1] = output[1];
    }
    // The all-zero state never leaves zero.
    if ((state[0] | state[1] | state[2] | state[3]) === 0) state[0] = 1;
  }

  uint32(): number {
    const s = this.state;
    const s1 = s[1];
    const scrambled = Math.imul(s1, 5);
    const result = Math.imul((scrambled << 7) | (scrambled >>> 25), 9) >>> 0;
    const s2 = s[2] ^ s[0];
    const s3 = s[3] ^ s1;
    s[1] = s1 ^ s2;
    s[0] ^= s3;
    s[2] = s2 ^ (s1 << 9);
    s[3] = (s3 << 11) | (s3 >>> 21);
    return result;
  }

  uniform(): number {
    for (;;) {
      const high = this.uint32() >>> 5;
      const u = (high * 67108864 + (this.uint32() >>> 6)) / 9007199254740992;
      // 0 is drawn once in 2⁵³ times; without it both log(u) and log(1 − u) are finite.
      if (u > 0) return u;
    }
  }
}

/**
 * A random stream made of a seed and a path of whole numbers (say purpose, replication, part): the same seed and path
 * give the same digits on any number of threads, and different paths give unrelated streams.
 *
 * Generator: xoshiro128** (Blackman & Vigna 2021, ACM Trans. Math. Softw. 47(4), 36), state filled by SplitMix64
 * (Steele, Lea & Flood 2014, OOPSLA) as its authors advise. The path is absorbed as h ← mix64(h + γ) xor word, so two
 * of a million paths share a 64-bit hash with a chance of about 10⁻⁸.
 *
 * @param seed safe whole number; @param path safe whole numbers.
 * @throws RangeError naming what is not one. Cost: about 0.1 µs and one object of 4 words.
 */
export function makeStream(seed: number, ...path: number[]): SeededStream {
  const stream = new Xoshiro128StarStar(new Int32Array(4));
  stream.reseed(seed, ...path);
  return stream;
}

/** A stream at a given internal state of four words, for checks against published sequences. */
export function makeStreamFromState(words: readonly [number, number, number, number]): RandomStream {
  if (words.every((word) => (word | 0) === 0)) throw new RangeError('state must not be all zero');
  return new Xoshiro128StarStar(Int32Array.from(words, (word) => word | 0));
}

/** Sets a stream to another seed and path in place: as makeStream, without a new object. */
export function reseed(stream: SeededStream, seed: number, ...path: number[]): void {
  stream.reseed(seed, ...path);
}
