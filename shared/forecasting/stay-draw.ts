import { drawGamma } from '../stochastic/gamma.ts';
import { drawNormal, normalQuantile } from '../stochastic/normal.ts';
import type { RandomStream } from '../stochastic/random.ts';
import { admittedStream, blockHazards, boardingStream, expectedShares } from './stay-model.ts';
import type { OutflowFactor, StayModel } from './stay-model.ts';

/** Where the segments of a horizon lie: block of the day, block for the shares, and day of the outflow factor, 0, 1, … */
export interface StaySegments {
  block: Uint8Array;
  shareBlock: Uint8Array;
  day: Int32Array;
}

/** One joint draw of everything unknown about stays; buffers are reused from replication to replication. */
export interface StayDraw {
  /** Departure hazard, outflow factor included, per hour: [stream · segments + segment], streams area-major. */
  hazard: Float64Array;
  /** Cumulative shares of the first three dispositions: [(area · shareBlocks + shareBlock) · 3 + i]. */
  shareSteps: Float64Array;
  /** Outflow factor of the first day: others, admitted. */
  firstFactor: [others: number, admitted: number];
}

/** Draws stays' parameters; `outflow` has a stream of its own so that a change of one leaves the other alone. */
export type DrawStays = (parameters: RandomStream, outflow: RandomStream, out: StayDraw) => void;

/** Buffers for draws. */
export function makeStayBuffers(stay: StayModel, segments: number): StayDraw {
  const shareBlocks = 24 / stay.shareBlockHours;
  return {
    hazard: new Float64Array(stay.streams.length * segments),
    shareSteps: new Float64Array(stay.areas * shareBlocks * 3),
    firstFactor: [1, 1],
  };
}

/** Stays at their posterior means, without outflow variation: what the exact methods and the choice of law stand on. */
export function expectedStays(stay: StayModel, segments: StaySegments): StayDraw {
  const count = segments.block.length;
  const out = makeStayBuffers(stay, count);
  stay.streams.forEach((stream, s) => {
    const hazards = blockHazards(stream);
    for (let k = 0; k < count; k += 1) out.hazard[s * count + k] = hazards[segments.block[k]];
  });
  let at = 0;
  for (const shares of stay.shares) {
    for (const block of expectedShares(shares)) {
      out.shareSteps[at] = block[0];
      out.shareSteps[at + 1] = block[0] + block[1];
      out.shareSteps[at + 2] = block[0] + block[1] + block[2];
      at += 3;
    }
  }
  return out;
}

/** Standard normal quantiles at the middles of 4,096 equal chances: errors of estimates need no finer law. */
const roughNormals = Float64Array.from({ length: 4096 }, (_, i) => normalQuantile((i + 0.5) / 4096));

/** From this shape on a gamma draw is Wilson & Hilferty's (1931) cube of a normal: quantiles within 0.1 %. */
const cubeFrom = 16;

/**
 * Gamma draws of rate 1 for errors of estimation, all shapes at once into `out`: hundreds a replication, hence fast rather
 * than exact to the last digit. Constants are made once.
 */
function makeShapeDraws(shapes: readonly number[]): { out: Float64Array; draw: (stream: RandomStream) => void } {
  const shape = Float64Array.from(shapes);
  const centre = shape.map((value) => Math.cbrt(value) * (1 - 1 / (9 * value)));
  const spread = shape.map((value) => Math.cbrt(value) * Math.sqrt(1 / (9 * value)));
  const out = new Float64Array(shape.length);
  function draw(stream: RandomStream): void {
    const normals = roughNormals;
    const count = out.length;
    for (let i = 0; i < count; i += 2) {
      // Two normals from one word.
      const word = stream.uint32();
      const first = centre[i] + normals[word >>> 20] * spread[i];
      out[i] = first * first * first;
      if (i + 1 === count) break;
      const second = centre[i + 1] + normals[word & 4095] * spread[i + 1];
      out[i + 1] = second * second * second;
    }
    for (const i of small) out[i] = drawGamma(stream, shape[i]);
  }
  const small = [...shape.keys()].filter((i) => shape[i] < cubeFrom);
  return { out, draw };
}

/**
 * Makes the joint draw of hazards, shares and outflow: μ from its gamma posterior, each block's factor given μ, shares
 * from their Dirichlet posterior, the outflow factor's variance and correlation from their errors, its path as AR(1) of
 * the logarithm with mean 1, and the error of the level it leaves. Only blocks that the horizon touches are drawn.
 * Cost: one gamma draw a stream and block touched.
 */
export function makeStayDraw(stay: StayModel, segments: StaySegments): DrawStays {
  const count = segments.block.length;
  const blocks = [...new Set(segments.block)].sort((a, b) => a - b);
  const shareBlocks = [...new Set(segments.shareBlock)].sort((a, b) => a - b);
  const shareBlocksPerDay = 24 / stay.shareBlockHours;
  const days = count > 0 ? segments.day[count - 1] + 1 : 1;
  const perStream = 1 + blocks.length;
  // Nobody can be in a boarding stream that no decision time was ever loaded for.
  const drawn = stay.streams
    .map((stream, s) => ({ stream, s }))
    .filter((one) => one.stream.stream !== boardingStream || one.stream.departures > 0);
  const hazards = makeShapeDraws(
    drawn.flatMap(({ stream }) => [
      stream.hazard.shape,
      ...blocks.map((block) => stream.blockStrength[block] + stream.blockDepartures[block]),
    ]),
  );
  const exposed = Float64Array.from(
    drawn.flatMap(({ stream }) => blocks.map((block) => stream.blockHoursAtRisk[block])),
  );
  const held = Float64Array.from(
    drawn.flatMap(({ stream }) => blocks.map((block) => stream.blockStrength[block] / stream.blockPrior[block])),
  );
  const sharing = makeShapeDraws(stay.shares.flatMap((shares) => shareBlocks.flatMap((block) => shares.alpha[block])));
  const blockPlace = segments.block.map((block) => blocks.indexOf(block));
  const byBlock = new Float64Array(blocks.length);
  const factors = [new Float64Array(days), new Float64Array(days)];
  const groups = [stay.outflow.others, stay.outflow.admitted];
  const { day } = segments;
  return (parameters, outflow, out) => {
    for (let g = 0; g < 2; g += 1) {
      drawOutflow(parameters, outflow, groups[g], factors[g]);
      out.firstFactor[g] = factors[g][0];
    }
    const { hazard, shareSteps } = out;
    hazards.draw(parameters);
    sharing.draw(parameters);
    const gammas = hazards.out;
    const parts = sharing.out;
    for (let n = 0; n < drawn.length; n += 1) {
      const { stream, s } = drawn[n];
      const factor = factors[stream.stream === admittedStream || stream.stream === boardingStream ? 1 : 0];
      const mu = gammas[n * perStream] / stream.hazard.rate;
      for (let b = 0; b < blocks.length; b += 1) {
        const g = gammas[n * perStream + 1 + b] / (held[n * blocks.length + b] + mu * exposed[n * blocks.length + b]);
        byBlock[b] = mu * g;
      }
      const from = s * count;
      for (let i = 0; i < count; i += 1) hazard[from + i] = byBlock[blockPlace[i]] * factor[day[i]];
    }
    for (let area = 0; area < stay.areas; area += 1) {
      for (let b = 0; b < shareBlocks.length; b += 1) {
        const first = (area * shareBlocks.length + b) * 4;
        const home = parts[first];
        const admitted = parts[first + 1];
        const transferred = parts[first + 2];
        const total = home + admitted + transferred + parts[first + 3];
        const at = (area * shareBlocksPerDay + shareBlocks[b]) * 3;
        shareSteps[at] = home / total;
        shareSteps[at + 1] = (home + admitted) / total;
        shareSteps[at + 2] = (home + admitted + transferred) / total;
      }
    }
  };
}

function drawOutflow(parameters: RandomStream, path: RandomStream, group: OutflowFactor, out: Float64Array): void {
  const relative = group.variance > 0 ? Math.min(0.5, group.varianceSe / group.variance) : 0;
  const variance = group.variance * Math.exp(relative * drawNormal(parameters) - (relative * relative) / 2);
  const correlation = Math.min(0.97, Math.max(0, group.correlation + group.correlationSe * drawNormal(parameters)));
  const level = group.levelSe * drawNormal(parameters);
  const logVariance = Math.log1p(variance);
  const sd = Math.sqrt(logVariance);
  const fresh = Math.sqrt(1 - correlation * correlation);
  let x = drawNormal(path);
  for (let d = 0; d < out.length; d += 1) {
    if (d > 0) x = correlation * x + fresh * drawNormal(path);
    out[d] = Math.exp(sd * x - logVariance / 2 + level);
  }
}

/** Blocks and days of the segments of a horizon. @param localHour the local hour of each segment. */
export function staySegments(
  stay: StayModel,
  localHour: ArrayLike<number>,
  blockAt: (localHour: number) => number,
): StaySegments {
  const count = localHour.length;
  const segments = { block: new Uint8Array(count), shareBlock: new Uint8Array(count), day: new Int32Array(count) };
  const dayOf = (hour: number): number => Math.floor((hour - stay.outflowDayStartsAt) / 24);
  for (let k = 0; k < count; k += 1) {
    segments.block[k] = blockAt(localHour[k]);
    segments.shareBlock[k] = Math.floor((((localHour[k] % 24) + 24) % 24) / stay.shareBlockHours);
    // A clock set back over midnight must not lead to a day before the first.
    segments.day[k] = Math.max(0, dayOf(localHour[k]) - dayOf(localHour[0]));
  }
  return segments;
}
