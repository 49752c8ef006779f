import { normalCdf } from '../stochastic/normal.ts';
import type { RandomStream } from '../stochastic/random.ts';
import { takeWords } from './quick-stream.ts';

const layers = 256;
/** Right end of the ziggurat's lowest layer for 256 layers (Marsaglia & Tsang 2000). */
const edge = 3.6541528853610088;

/** Per layer: width of one step of 23 bits, steps that lie under the curve for sure, and the density at the layer's right end. */
const width = new Float64Array(layers);
const inside = new Int32Array(layers);
const height = new Float64Array(layers + 1);

(function makeLayers(): void {
  const steps = 2 ** 23;
  const density = (x: number): number => Math.exp((-x * x) / 2);
  // Area of every layer: the lowest one's rectangle and the tail beyond it.
  const area = edge * density(edge) + Math.sqrt(2 * Math.PI) * normalCdf(-edge);
  // x[0] is the lowest layer's width as if its tail were a rectangle; x[1] = edge; then upwards to x[256] = 0.
  const x = new Float64Array(layers + 1);
  x[0] = area / density(edge);
  x[1] = edge;
  for (let i = 2; i < layers; i += 1) x[i] = Math.sqrt(-2 * Math.log(density(x[i - 1]) + area / x[i - 1]));
  for (let i = 0; i < layers; i += 1) {
    width[i] = x[i] / steps;
    inside[i] = Math.floor((x[i + 1] / x[i]) * steps);
    height[i] = density(x[i]);
  }
  height[layers] = 1;
})();

/**
 * A standard normal draw by the ziggurat (Marsaglia & Tsang 2000, J. Stat. Softw. 5(8)): one word in 98 of 100 draws, a
 * tenth of the time of a draw by inversion. Not monotone in a uniform: replications are paired by reseeding instead.
 */
export function drawQuickNormal(stream: RandomStream): number {
  const word = stream.uint32() | 0;
  const layer = word & 255;
  // 24 bits with their sign; the half keeps both sides alike.
  const step = (word >> 8) + 0.5;
  const size = Math.abs(step);
  return size < inside[layer] ? step * width[layer] : outside(stream, layer, step);
}

const words = new Uint32Array(64);

/** Standard normal draws into a buffer: as `drawQuickNormal`, in loops without calls, which the compiler frees of its checks. */
export function fillQuickNormals(stream: RandomStream, out: Float64Array, count: number): void {
  // Local names: captured ones are looked up again every turn.
  const widths = width;
  const surely = inside;
  const drawn = words;
  for (let done = 0; done < count; done += drawn.length) {
    const some = Math.min(drawn.length, count - done);
    takeWords(stream, drawn, some);
    let beyond = 0;
    for (let i = 0; i < some; i += 1) {
      const word = drawn[i] | 0;
      const layer = word & 255;
      const step = (word >> 8) + 0.5;
      out[done + i] = step * widths[layer];
      beyond += Math.abs(step) < surely[layer] ? 0 : 1;
    }
    for (let i = 0; beyond > 0; i += 1) {
      const word = drawn[i] | 0;
      const step = (word >> 8) + 0.5;
      if (Math.abs(step) < surely[word & 255]) continue;
      out[done + i] = outside(stream, word & 255, step);
      beyond -= 1;
    }
  }
}

function outside(stream: RandomStream, firstLayer: number, firstStep: number): number {
  let layer = firstLayer;
  let step = firstStep;
  for (;;) {
    const x = step * width[layer];
    if (Math.abs(step) < inside[layer]) return x;
    if (layer === 0) return x < 0 ? -tail(stream) : tail(stream);
    if (height[layer] + stream.uniform() * (height[layer + 1] - height[layer]) < Math.exp((-x * x) / 2)) return x;
    const word = stream.uint32() | 0;
    layer = word & 255;
    step = (word >> 8) + 0.5;
  }
}

/** Beyond the lowest layer's end: Marsaglia's (1964) exponential majorant. */
function tail(stream: RandomStream): number {
  for (;;) {
    const beyond = -Math.log(stream.uniform()) / edge;
    if (-2 * Math.log(stream.uniform()) > beyond * beyond) return edge + beyond;
  }
}

/**
 * A gamma draw of rate 1 by Marsaglia & Tsang (2000, ACM Trans. Math. Softw. 26, 363) with their
 * squeeze, which spares the logarithms in 98 of 100 draws. Exact for any shape above 0.
 */
export function drawQuickGamma(stream: RandomStream, shape: number): number {
  // The draw of shape + 1 times U^(1/shape).
  if (shape < 1) return drawQuickGamma(stream, shape + 1) * Math.pow(stream.uniform(), 1 / shape);
  const d = shape - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const x = drawQuickNormal(stream);
    const root = 1 + c * x;
    if (root <= 0) continue;
    const v = root * root * root;
    const u = stream.uniform();
    const square = x * x;
    if (u < 1 - 0.0331 * square * square) return d * v;
    if (Math.log(u) < 0.5 * square + d * (1 - v + Math.log(v))) return d * v;
  }
}
