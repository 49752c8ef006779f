import { makeStream } from '../stochastic/random.ts';
import type { RandomStream, SeededStream } from '../stochastic/random.ts';

const words = 64;
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

/**
 * The stream of the patients' loop: xoshiro128** (Blackman & Vigna 2021) filled 64 words at a time with its state in
 * registers, seeded by the first four words of the seeded stream of the same seed and path. A third of the time a word.
 */
export class QuickStream implements RandomStream {
  private readonly seeder: SeededStream = makeStream(0);
  private readonly block = new Uint32Array(words);
  private next = words;
  private a = 0;
  private b = 0;
  private c = 0;
  private d = 1;

  /** Sets seed and path: as makeStream. */
  reseed(seed: number, purpose: number, replication: number, place: number): void {
    const { seeder } = this;
    seeder.reseed(seed, purpose, replication, place);
    this.a = seeder.uint32() | 0;
    this.b = seeder.uint32() | 0;
    this.c = seeder.uint32() | 0;
    // The state of all zeros would stay there; one in 2¹²⁸ is still made impossible.
    this.d = seeder.uint32() | 1;
    this.next = words;
  }

  private fill(): void {
    let { a, b, c, d } = this;
    const { block } = this;
    for (let i = 0; i < words; i += 1) {
      const scrambled = Math.imul(b, 5);
      block[i] = Math.imul((scrambled << 7) | (scrambled >>> 25), 9);
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
    this.next = 0;
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
    const word = this.uint32();
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
