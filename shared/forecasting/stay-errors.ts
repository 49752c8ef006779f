import { normalQuantile } from '../stochastic/normal.ts';
import type { RandomStream } from '../stochastic/random.ts';
import { drawQuickGamma, drawQuickNormal } from './quick-normal.ts';
import { takeWords } from './quick-stream.ts';
import type { StayDraw, StaySegments } from './stay-draw.ts';
import { outflowPlace } from './decision-stage.ts';
import { boardingStream } from './stay-model.ts';
import type { OutflowFactor, StayModel } from './stay-model.ts';

/** Standard normal quantiles at the middles of 1,024 equal chances, scaled to variance 1: errors of estimates need no finer law. Single precision keeps them near. */
const roughNormals = (function (): Float32Array {
  const middles = Float64Array.from({ length: 1024 }, (_, i) => normalQuantile((i + 0.5) / 1024));
  const variance = middles.reduce((sum, value) => sum + value * value, 0) / 1024;
  return Float32Array.from(middles, (value) => value / Math.sqrt(variance));
})();

/** From this shape on a gamma draw is Wilson & Hilferty's (1931) cube of a normal: quantiles within 0.1 %. */
const cubeFrom = 16;

/**
 * Gamma draws of rate 1 for errors of estimation, all shapes at once into `out`: hundreds a replication, hence fast rather
 * than exact to the last digit. Constants are made once.
 */
function makeShapeDraws(shapes: readonly number[]): { out: Float64Array; draw: (stream: RandomStream) => void } {
  const count = shapes.length;
  // Three normals come of one word: rooms are filled up to a multiple of three.
  const room = 3 * Math.ceil(count / 3);
  const centre = new Float64Array(room);
  const spread = new Float64Array(room);
  shapes.forEach((shape, i) => {
    centre[i] = Math.cbrt(shape) * (1 - 1 / (9 * shape));
    spread[i] = Math.cbrt(shape) * Math.sqrt(1 / (9 * shape));
  });
  const small = Int32Array.from([...shapes.keys()].filter((i) => shapes[i] < cubeFrom));
  const smallShape = Float64Array.from(small, (i) => shapes[i]);
  const out = new Float64Array(room);
  const words = new Uint32Array(room / 3);
  function draw(stream: RandomStream): void {
    // Local names: captured ones are looked up again at every store.
    const to = out;
    const mean = centre;
    const sd = spread;
    const normals = roughNormals;
    const drawn = words;
    takeWords(stream, drawn, room / 3);
    for (let i = 0, next = 0; i < room; i += 3, next += 1) {
      const word = drawn[next];
      const first = mean[i] + normals[word & 1023] * sd[i];
      const second = mean[i + 1] + normals[(word >>> 10) & 1023] * sd[i + 1];
      const third = mean[i + 2] + normals[(word >>> 20) & 1023] * sd[i + 2];
      to[i] = first * first * first;
      to[i + 1] = second * second * second;
      to[i + 2] = third * third * third;
    }
    for (let i = 0; i < small.length; i += 1) to[small[i]] = drawQuickGamma(stream, smallShape[i]);
  }
  return { out, draw };
}

/** What is drawn about stays before it is laid out over the segments. */
export interface StayErrors {
  draw: (parameters: RandomStream, outflow: RandomStream) => void;
  /** Streams that are drawn, and for each whether the admitted patients' outflow factor (1) or the others' (0) moves it. */
  streams: Int32Array;
  group: Uint8Array;
  /** Departure hazard without the outflow factor: [drawn stream · blocks + block touched]. */
  blockHazard: Float64Array;
  blocks: number;
  /** Of the blocks touched the one of each segment. */
  blockPlace: Uint8Array;
  /** Outflow factor by day: others, admitted. */
  factors: [Float64Array, Float64Array];
  /** Lays out the drawn shares and the first day's factors. */
  layShares: (out: Pick<StayDraw, 'shareSteps' | 'firstFactor'>) => void;
}

/** Makes the draw of everything unknown about stays, of the blocks that the horizon touches. Buffers are reused. */
export function makeStayErrors(stay: StayModel, segments: StaySegments): StayErrors {
  const count = segments.block.length;
  const touched = [...new Set(segments.block)].sort((a, b) => a - b);
  const shareBlocks = Int32Array.from([...new Set(segments.shareBlock)].sort((a, b) => a - b));
  const shareBlocksPerDay = 24 / stay.shareBlockHours;
  const days = count > 0 ? segments.day[count - 1] + 1 : 1;
  const blocks = touched.length;
  // Nobody can be in a boarding stream that no decision time was ever loaded for.
  const drawn = stay.streams
    .map((stream, s) => ({ stream, s }))
    .filter((one) => one.stream.stream !== boardingStream || one.stream.departures > 0);
  const means = drawn.length;
  const firstShare = means * (1 + blocks);
  const gammas = makeShapeDraws([
    ...drawn.map(({ stream }) => stream.hazard.shape),
    ...drawn.flatMap(({ stream }) =>
      touched.map((block) => stream.blockStrength[block] + stream.blockDepartures[block]),
    ),
    ...stay.shares.flatMap((shares) => Array.from(shareBlocks).flatMap((block) => shares.alpha[block])),
  ]);
  const rate = Float64Array.from(drawn, ({ stream }) => stream.hazard.rate);
  const exposed = Float64Array.from(
    drawn.flatMap(({ stream }) => touched.map((block) => stream.blockHoursAtRisk[block])),
  );
  const held = Float64Array.from(
    drawn.flatMap(({ stream }) => touched.map((block) => stream.blockStrength[block] / stream.blockPrior[block])),
  );
  const blockHazard = new Float64Array(means * blocks);
  const factors: [Float64Array, Float64Array] = [new Float64Array(days), new Float64Array(days)];
  const { others, admitted } = stay.outflow;
  const { areas } = stay;
  return {
    streams: Int32Array.from(drawn, ({ s }) => s),
    group: Uint8Array.from(drawn, ({ stream }) => outflowPlace(stay, stream.stream)),
    blockHazard,
    blocks,
    blockPlace: segments.block.map((block) => touched.indexOf(block)),
    factors,
    draw: (parameters, outflow) => {
      drawOutflow(parameters, outflow, others, factors[0]);
      drawOutflow(parameters, outflow, admitted, factors[1]);
      gammas.draw(parameters);
      const drawnGammas = gammas.out;
      const to = blockHazard;
      const heldAt = held;
      const exposedAt = exposed;
      for (let n = 0, i = 0; n < means; n += 1) {
        const mu = drawnGammas[n] / rate[n];
        for (let b = 0; b < blocks; b += 1, i += 1) {
          to[i] = (mu * drawnGammas[means + i]) / (heldAt[i] + mu * exposedAt[i]);
        }
      }
    },
    layShares: (out) => {
      out.firstFactor[0] = factors[0][0];
      out.firstFactor[1] = factors[1][0];
      const { shareSteps } = out;
      const parts = gammas.out;
      for (let area = 0, from = firstShare; area < areas; area += 1) {
        for (let b = 0; b < shareBlocks.length; b += 1, from += 4) {
          const home = parts[from];
          const upToAdmitted = home + parts[from + 1];
          const upToTransferred = upToAdmitted + parts[from + 2];
          const total = upToTransferred + parts[from + 3];
          const at = (area * shareBlocksPerDay + shareBlocks[b]) * 3;
          shareSteps[at] = home / total;
          shareSteps[at + 1] = upToAdmitted / total;
          shareSteps[at + 2] = upToTransferred / total;
        }
      }
    },
  };
}

function drawOutflow(parameters: RandomStream, path: RandomStream, group: OutflowFactor, out: Float64Array): void {
  const relative = group.variance > 0 ? Math.min(0.5, group.varianceSe / group.variance) : 0;
  const variance = group.variance * Math.exp(relative * drawQuickNormal(parameters) - (relative * relative) / 2);
  const correlation = Math.min(
    0.97,
    Math.max(0, group.correlation + group.correlationSe * drawQuickNormal(parameters)),
  );
  const level = group.levelSe * drawQuickNormal(parameters);
  const logVariance = Math.log1p(variance);
  const sd = Math.sqrt(logVariance);
  const fresh = Math.sqrt(1 - correlation * correlation);
  let x = drawQuickNormal(path);
  for (let d = 0; d < out.length; d += 1) {
    if (d > 0) x = correlation * x + fresh * drawQuickNormal(path);
    out[d] = Math.exp(sd * x - logVariance / 2 + level);
  }
}
