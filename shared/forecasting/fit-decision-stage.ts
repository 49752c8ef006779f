import { tallyStays } from './collect-stays.ts';
import type { CollectedStays, StayTallies } from './collect-stays.ts';
import { fitStreams } from './fit-streams.ts';
import type { BlockCells } from './stay-clock.ts';
import { operationalClock } from './stay-compensator.ts';
import { blockHazards, admittedStream, boardingStream, decisionStage, streamsPerArea } from './stay-model.ts';
import type { OutflowGroup, StayStream } from './stay-model.ts';
import { fitStayShapes } from './stay-shape.ts';

/** Fewer decisions than this are not worth a stage of their own, nor are they if many admitted patients have none. */
const fewestDecisions = 200;
const fewestDecided = 0.9;

/** By area, whether admitted patients are fitted in two stages: nearly all of them have a decision, and there are enough. */
export function stagedAreas(stays: CollectedStays, areas: number): boolean[] {
  const decided = new Float64Array(areas);
  const admitted = new Float64Array(areas);
  for (let i = 0; i < stays.length; i += 1) {
    const area = Math.floor(stays.stream[i] / streamsPerArea);
    const stream = stays.stream[i] % streamsPerArea;
    if (stream === boardingStream) decided[area] += 1;
    if (stream === admittedStream) admitted[area] += stays.departed[i];
  }
  return Array.from(decided, (count, a) => count >= fewestDecisions && count >= fewestDecided * admitted[a]);
}

/**
 * The stage from arrival to the admission decision, fitted like any stream: hazard by block of the day, held to the site's
 * pattern, and the stage's own shape. Whether the day's factor of the admitted or that of the others moves it is decided
 * by likelihood over the site.
 * Cost: linear in stays.
 */
export function fitDecisionStage(
  stays: CollectedStays,
  staged: readonly boolean[],
  cells: BlockCells,
  blockHours: number,
  factorOf: Record<OutflowGroup, Float64Array>,
): { toDecision: (StayStream | null)[]; decisionFollows: OutflowGroup } {
  if (!staged.some(Boolean)) return { toDecision: staged.map(() => null), decisionFollows: 'others' };
  const until = untilDecision(stays, staged);
  const tallies = tallyStays(until, cells, blockHours, staged.length * streamsPerArea);
  const fits = (['others', 'admitted'] as const).map((group) => {
    const streams = fitStreams(tallies, () => factorOf[group], cells.block, blockHours);
    return { group, streams, score: logLikelihood(streams, tallies, factorOf[group], cells.block) };
  });
  const { group, streams } = fits[fits[1].score > fits[0].score ? 1 : 0];
  const clock = operationalClock(cells, streams, () => factorOf[group]);
  const shapes = fitStayShapes(until, cells, blockHours, clock);
  return {
    toDecision: staged.map((is, area) => {
      const place = area * streamsPerArea + admittedStream;
      return is ? { ...streams[place], stream: decisionStage, shape: shapes[place] } : null;
    }),
    decisionFollows: group,
  };
}

/** Intervals from arrival to decision, in the admitted stream's place. A boarding stay stands just after its whole stay. */
function untilDecision(stays: CollectedStays, staged: readonly boolean[]): CollectedStays {
  const boarding: number[] = [];
  for (let i = 0; i < stays.length; i += 1) {
    const area = Math.floor(stays.stream[i] / streamsPerArea);
    if (staged[area] && stays.stream[i] % streamsPerArea === boardingStream) boarding.push(i);
  }
  return {
    ...stays,
    length: boarding.length,
    stream: Uint16Array.from(boarding, (i) => stays.stream[i - 1]),
    startAt: Float64Array.from(boarding, (i) => stays.startAt[i - 1]),
    endAt: Float64Array.from(boarding, (i) => Math.min(stays.startAt[i], stays.endAt[i - 1])),
    departed: Uint8Array.from(boarding, (i) => (stays.startAt[i] <= stays.endAt[i - 1] ? 1 : 0)),
  };
}

/** Σ d·log(μ g f) − μ g f·T over streams and cells, d decisions and T hours at risk: a Poisson process's log-likelihood. */
function logLikelihood(
  streams: readonly StayStream[],
  tallies: StayTallies,
  factor: Float64Array,
  block: Uint8Array,
): number {
  let sum = 0;
  streams.forEach((stream, index) => {
    if (stream.stream !== admittedStream || stream.departures === 0) return;
    const hazards = blockHazards(stream);
    for (let c = 0; c < block.length; c += 1) {
      const hazard = hazards[block[c]] * factor[c];
      const departures = tallies.departures[index][c];
      sum -= hazard * tallies.hoursAtRisk[index][c];
      if (departures > 0) sum += departures * Math.log(hazard);
    }
  });
  return sum;
}
