import { fitCensoredExponential } from '../stochastic/censored-exponential.ts';
import type { StayTallies } from './collect-stays.ts';
import { streamsPerArea } from './stay-model.ts';
import type { StayStream } from './stay-model.ts';
import { chooseBlockShrinkage } from './stay-shrinkage.ts';

function limitsOf(departures: number, hoursAtRisk: number): [low: number, high: number] {
  const fit = fitCensoredExponential(departures, hoursAtRisk, 0.95);
  return [fit.lower, fit.upper];
}

/** μ and g of every stream, with the time at risk weighed by the outflow factor of its cell. */
export function fitStreams(
  tallies: StayTallies,
  factorByCell: (stream: number) => Float64Array,
  block: Uint8Array,
  blockHours: number,
): StayStream[] {
  const blocks = (2 * 24) / blockHours;
  const streams = tallies.departures.map((departures, index): StayStream => {
    const stream = index % streamsPerArea;
    const factors = factorByCell(stream);
    const risk = tallies.hoursAtRisk[index];
    const blockDepartures = new Array<number>(blocks).fill(0);
    const blockHoursAtRisk = new Array<number>(blocks).fill(0);
    let plainRisk = 0;
    for (let c = 0; c < block.length; c += 1) {
      blockDepartures[block[c]] += departures[c];
      blockHoursAtRisk[block[c]] += risk[c] * factors[c];
      plainRisk += risk[c];
    }
    const left = blockDepartures.reduce((a, b) => a + b, 0);
    return {
      area: Math.floor(index / streamsPerArea),
      stream,
      visits: tallies.visits[index],
      censored: tallies.censored[index],
      departures: left,
      hoursAtRisk: plainRisk,
      departuresPerHour: left > 0 && plainRisk > 0 ? left / plainRisk : null,
      limits: plainRisk > 0 ? limitsOf(left, plainRisk) : null,
      hazard: { shape: left, rate: blockHoursAtRisk.reduce((a, b) => a + b, 0) },
      blockStrength: [],
      blockPrior: [],
      blockDepartures,
      blockHoursAtRisk,
      shape: null,
    };
  });
  for (let kind = 0; kind < streamsPerArea; kind += 1) {
    // A site without a single such departure borrows from all streams together.
    const alike = pooled(streams.filter((stream) => stream.stream === kind));
    const perHour = alike ?? pooled(streams) ?? 0.25;
    for (const stream of streams.filter((one) => one.stream === kind)) {
      // One departure's weight at the pooled hazard; stays of length 0 alone still give a finite hazard, 1 a minute at most.
      stream.hazard = {
        shape: stream.hazard.shape + 1,
        rate: Math.max(stream.hazard.rate + 1 / perHour, (stream.hazard.shape + 1) / 60),
      };
    }
    holdBlocks(
      streams.filter((one) => one.stream === kind),
      blocks,
    );
  }
  return streams;
}

/** The pattern of a disposition over the site, held to 1; then each of its streams, held to the pattern. */
function holdBlocks(streams: readonly StayStream[], blocks: number): void {
  const departures = new Float64Array(blocks);
  const expected = new Float64Array(blocks);
  const mean = (stream: StayStream): number => stream.hazard.shape / stream.hazard.rate;
  for (const stream of streams) {
    for (let b = 0; b < blocks; b += 1) {
      departures[b] += stream.blockDepartures[b];
      expected[b] += stream.blockHoursAtRisk[b] * mean(stream);
    }
  }
  const k = chooseBlockShrinkage(departures, expected);
  const pattern = Array.from(departures, (n, b) => (k + n) / (k + expected[b]));
  for (const stream of streams) {
    stream.blockPrior = pattern;
    const own = stream.blockHoursAtRisk.map((hours, b) => hours * mean(stream) * pattern[b]);
    const strength = chooseBlockShrinkage(stream.blockDepartures, own);
    stream.blockStrength = Array.from(departures, (n) => Math.min(strength, k + n));
  }
}

function pooled(streams: readonly StayStream[]): number | null {
  const shape = streams.reduce((sum, stream) => sum + stream.departures, 0);
  const rate = streams.reduce((sum, stream) => sum + stream.hoursAtRisk, 0);
  return shape > 0 && rate > 0 ? shape / rate : null;
}
