import type * as WaitingSimulation from '../../shared/forecasting/waiting-simulation.ts';
import type { WaitingPart, WaitingPlan } from '../../shared/forecasting/waiting-simulation.ts';
import { built } from './built.ts';
import { measure, median, processorSeconds, single, type Bench, type Figure } from './measure.ts';
import { isPresent, runScript, simpy } from './peers/peer.ts';

const segments = 168;
const beds = 60;
const hazardPerHour = 1 / 4.5;
const inBedSpaces = 40;
const peerRuns = 5;
const peerReplications = 40;
/** Hourly means below this are not compared. */
const leastMean = 0.5;

/** A week of one department with sixty beds, 11 arrivals an hour on average, stays of 4.5 h in a bed space. */
export function waitingPlan(): WaitingPlan {
  return {
    seed: 3,
    segmentAt: Float64Array.from({ length: segments + 1 }, (_, k) => k),
    ratePerHour: Float64Array.from({ length: segments }, (_, k) => 11 + 5 * Math.sin(((k - 9) * Math.PI) / 12)),
    beds: new Int32Array(segments).fill(beds),
    steps: Float64Array.of(1),
    hazardPerHour: [new Float64Array(segments).fill(hazardPerHour)],
    impatiencePerHour: 0,
    redraw: null,
    inBedSpaces: [inBedSpaces],
    waiting: 0,
    highest: 400,
    waitLimitHours: 1,
  };
}

interface PeerOutcome {
  version: string;
  seconds: number;
  patients: number;
  /** By hour: sum and sum of squares of those present, and of those waiting. */
  sums: [number, number, number, number][];
}

interface Moments {
  mean: number;
  weeks: number;
  /** Of the mean. */
  variance: number;
}

function moments(sum: number, squares: number, n: number): Moments {
  const mean = sum / n;
  return { mean, weeks: n, variance: Math.max(0, squares / n - mean * mean) / (n - 1) };
}

/** Mean of a histogram's row with the variance of that mean. */
function momentsOf(counts: Int32Array, size: number, row: number): Moments {
  let n = 0;
  let sum = 0;
  let squares = 0;
  for (let value = 0; value < size; value += 1) {
    const times = counts[row * size + value];
    n += times;
    sum += times * value;
    squares += times * value * value;
  }
  return moments(sum, squares, n);
}

/**
 * Largest difference between our hourly means (present, waiting) and the peer's, in standard errors of the difference.
 * Of at most 336 equal pairs the largest is below 4.5 in all but one run in 440.
 */
export function largestDifference(
  part: Pick<WaitingPart, 'present' | 'waiting' | 'size'>,
  sums: PeerOutcome['sums'],
  replications: number,
): number {
  let largest = 0;
  sums.forEach(([present, presentSquares, waiting, waitingSquares], k) => {
    const pairs = [
      [momentsOf(part.present, part.size, k), moments(present, presentSquares, replications)],
      [momentsOf(part.waiting, part.size, k), moments(waiting, waitingSquares, replications)],
    ];
    for (const [ours, theirs] of pairs) {
      // Where hardly anybody ever waits, a mean over some hundred weeks is far from normal.
      if (ours.mean < leastMean) continue;
      // The spread of a week is known better from our many weeks than from the peer's few.
      const variance = ours.variance * (1 + ours.weeks / replications);
      largest = Math.max(largest, Math.abs(ours.mean - theirs.mean) / Math.sqrt(variance));
    }
  });
  return largest;
}

function runSimpy(): PeerOutcome[] {
  const plan = waitingPlan();
  return Array.from({ length: peerRuns }, (_, run) => {
    const input = {
      segmentAt: [...plan.segmentAt],
      ratePerHour: [...plan.ratePerHour],
      beds,
      hazardPerHour,
      inBedSpaces,
      waiting: 0,
      waitLimitHours: plan.waitLimitHours,
      seed: run + 1,
      replications: peerReplications,
    };
    return JSON.parse(runScript(simpy, 'waiting-simpy.py', [], JSON.stringify(input))) as PeerOutcome;
  });
}

function addUp(outcomes: readonly PeerOutcome[]): PeerOutcome['sums'] {
  return outcomes[0].sums.map((_, k) => {
    const all = (i: number) => outcomes.reduce((sum, { sums }) => sum + sums[k][i], 0);
    return [all(0), all(1), all(2), all(3)];
  });
}

export const waitingBenches: Bench[] = [
  {
    name: 'waiting simulation',
    run: async () => {
      const { simulateWaitingPart } = await built<typeof WaitingSimulation>('forecasting/waiting-simulation');
      const unit = 'million patients/s';
      const figures: Figure[] = [
        await measure(
          { name: 'waiting simulation, M_t/M/60 over a week, one core', unit, better: 'higher', goal: 5.5 },
          () => {
            const startedAt = performance.now();
            const part = simulateWaitingPart(waitingPlan(), 0, 1000);
            return part.patients / (performance.now() - startedAt) / 1000;
          },
        ),
      ];
      const byProcessor: number[] = [];
      for (let run = 0; run < 5; run += 1) {
        let patients = 0;
        const seconds = processorSeconds(() => {
          patients = simulateWaitingPart(waitingPlan(), run * 1000, (run + 1) * 1000).patients;
        });
        byProcessor.push(patients / seconds / 1e6);
      }
      const outcomes = isPresent(simpy) ? runSimpy() : [];
      const speeds = outcomes.map(({ patients, seconds }) => patients / seconds / 1e6);
      const peer = median({ name: '', unit, better: 'higher' }, speeds);
      figures.push(
        median(
          {
            name: 'waiting simulation, the same by processor time',
            unit,
            better: 'higher',
            goalRatio: 100,
            compare: outcomes.length > 0 ? { name: `SimPy ${outcomes[0].version}`, value: peer.value } : null,
          },
          byProcessor,
        ),
      );
      if (outcomes.length > 0) {
        const part = simulateWaitingPart(waitingPlan(), 0, 10_000);
        figures.push(
          single(
            {
              name: 'waiting simulation beside SimPy, largest difference of an hourly mean',
              unit: 'standard errors',
              better: 'lower',
              goal: 4.5,
            },
            largestDifference(part, addUp(outcomes), peerRuns * peerReplications),
          ),
        );
      }
      return figures;
    },
  },
];
