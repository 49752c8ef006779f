import type { RandomStream } from '../stochastic/random.ts';

const words = 32;
const layers = 256;
/** Right end of the ziggurat's lowest layer and the area of every layer (Marsaglia & Tsang 2000). */
const edge = 7.69711747013104972;
const area = 0.0039496598225815571993;

/** Per layer: width of one step of 24 bits, steps that lie under the curve for sure, and the density at the layer's right end. */
const width = new Float64Array(layers);
const inside = new Float64Array(layers);
const height = new Float64Array(layers + 1);

(function makeLayers(): void {
  const steps = 2 ** 24;
  // x[0] is the lowest layer's width as if its tail were a rectangle; x[1] = edge; then upwards to x[256] = 0.
  const x = new Float64Array(layers + 1);
  x[0] = area / Math.exp(-edge);
  x[1] = edge;
  for (let i = 2; i < layers; i += 1) x[i] = -Math.log(Math.exp(-x[i - 1]) + area / x[i - 1]);
  x[layers] = 0;
  for (let i = 0; i < layers; i += 1) {
    width[i] = x[i] / steps;
    inside[i] = Math.floor((x[i + 1] / x[i]) * steps);
    height[i] = Math.exp(-x[i]);
  }
  height[layers] = 1;
})();

/** The 64-bit hash that a path is absorbed into, low and high word; longer than that because arrays so short are no constants to the compiler. */
const hash = new Int32Array(32);

/** h += 0x9e3779b97f4a7c15. */
function advance(): void {
  const sum = (hash[0] >>> 0) + 0x7f4a7c15;
  hash[0] = sum;
  hash[1] += 0x9e3779b9 + (sum > 0xffffffff ? 1 : 0);
}

/** Upper 32 bits of the product of two words: schoolbook on halves of 16 bits. */
function upperProduct(a: number, b: number): number {
  const a0 = a & 0xffff;
  const a1 = a >>> 16;
  const b0 = b & 0xffff;
  const b1 = b >>> 16;
  const cross = a1 * b0;
  const other = a0 * b1;
  const middle = ((a0 * b0) >>> 16) + (cross & 0xffff) + (other & 0xffff);
  return (a1 * b1 + (cross >>> 16) + (other >>> 16) + (middle >>> 16)) | 0;
}

/** SplitMix64's output function on the hash. */
function mix(): void {
  const low = hash[0];
  const high = hash[1];
  let l = low ^ ((low >>> 30) | (high << 2));
  let h = high ^ (high >>> 30);
  h = (upperProduct(l, 0x1ce4e5b9) + Math.imul(h, 0x1ce4e5b9) + Math.imul(l, 0xbf58476d)) | 0;
  l = Math.imul(l, 0x1ce4e5b9);
  l ^= (l >>> 27) | (h << 5);
  h ^= h >>> 27;
  h = (upperProduct(l, 0x133111eb) + Math.imul(h, 0x133111eb) + Math.imul(l, 0x94d049bb)) | 0;
  l = Math.imul(l, 0x133111eb);
  hash[0] = l ^ ((l >>> 31) | (h << 1));
  hash[1] = h ^ (h >>> 31);
}

/** Absorbs a whole number of at most 53 bits. */
function absorb(word: number): void {
  advance();
  mix();
  hash[0] ^= word | 0;
  hash[1] ^= Math.floor(word / 4294967296) | 0;
}

/** The layers' tables, for loops that keep a copy of their own. */
export const exponentialLayers: { width: Float64Array; inside: Float64Array } = { width, inside };

/**
 * The stream of the patients' loop: the words of `makeStream` of the same seed and path, made 32 at a time with the state
 * in registers and seeded without an array or object: a third of the time a word, a quarter a seeding.
 */
export class QuickStream implements RandomStream {
  private readonly block = new Uint32Array(words);
  private next = words;
  /** State of the generator, open to loops that draw many words at once; whoever moves it on calls `skipBlock`. */
  a = 0;
  b = 0;
  c = 0;
  d = 1;

  /** Sets seed and path: as makeStream, for safe whole numbers, which the caller has checked. */
  reseed(seed: number, purpose: number, replication: number, place: number): void {
    hash[0] = seed | 0;
    hash[1] = Math.floor(seed / 4294967296) | 0;
    absorb(purpose);
    absorb(replication);
    absorb(place);
    advance();
    const keptLow = hash[0];
    const keptHigh = hash[1];
    mix();
    this.a = hash[0];
    this.b = hash[1];
    hash[0] = keptLow;
    hash[1] = keptHigh;
    advance();
    mix();
    this.c = hash[0];
    this.d = hash[1];
    // The state of all zeros would stay there.
    if ((this.a | this.b | this.c | this.d) === 0) this.a = 1;
    this.next = words;
  }

  private fill(): void {
    this.make(this.block, words);
    this.next = 0;
  }

  /**
   * Writes words into a buffer, for loops that know how many they need: what is left of a block is dropped, so that a
   * stretch of the sequence is used once at most.
   */
  make(out: Uint32Array, count: number): void {
    let { a, b, c, d } = this;
    for (let i = 0; i < count; i += 1) {
      const scrambled = Math.imul(b, 5);
      out[i] = Math.imul((scrambled << 7) | (scrambled >>> 25), 9);
      const shifted = b << 9;
      c ^= a;
      d ^= b;
      b ^= c;
      a ^= d;
      c ^= shifted;
      d = (d << 11) | (d >>> 21);
    }
    this.a = a;
    this.b = b;
    this.c = c;
    this.d = d;
    this.next = words;
  }

  /** Drops what is left of the block: words of the state as it now is come next. */
  skipBlock(): void {
    this.next = words;
  }

  /** Uniform on 0 .. 2³² − 1. */
  uint32(): number {
    if (this.next === words) this.fill();
    const word = this.block[this.next];
    this.next += 1;
    return word;
  }

  /** Uniform on (0, 1) from one word: 32 bits are ample for choices and times. */
  uniform(): number {
    return (this.uint32() + 0.5) * 2 ** -32;
  }

  /** Exponential of mean 1 by the ziggurat (Marsaglia & Tsang 2000, J. Stat. Softw. 5(8)): one word in 98 of 100 draws. */
  exponential(): number {
    return this.exponentialFrom(this.uint32());
  }

  /** The same from a word already drawn; the few that fall outside take more words of the stream. */
  exponentialFrom(word: number): number {
    const layer = word & 255;
    const step = word >>> 8;
    if (step < inside[layer]) return (step + 0.5) * width[layer];
    return this.exponentialOutside(layer, step);
  }

  private exponentialOutside(firstLayer: number, firstStep: number): number {
    let layer = firstLayer;
    let step = firstStep;
    for (;;) {
      const x = (step + 0.5) * width[layer];
      if (step < inside[layer]) return x;
      // Beyond the lowest layer's end the law begins anew: it has no memory.
      if (layer === 0) return edge - Math.log(this.uniform());
      if (height[layer] + this.uniform() * (height[layer + 1] - height[layer]) < Math.exp(-x)) return x;
      const word = this.uint32();
      layer = word & 255;
      step = word >>> 8;
    }
  }
}

/** Words of any stream into a buffer; of a quick one all at once. */
export function takeWords(stream: RandomStream, out: Uint32Array, count: number): void {
  if (stream instanceof QuickStream) stream.make(out, count);
  else for (let i = 0; i < count; i += 1) out[i] = stream.uint32();
}
