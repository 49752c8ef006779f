import type { StayTallies } from './collect-stays.ts';
import { estimateOutflow, smoothOutflow } from './outflow-factor.ts';
import type { DailyOutflow } from './outflow-factor.ts';
import type { BlockCells } from './stay-clock.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import type { OutflowFactor, OutflowGroup, StayStream } from './stay-model.ts';

/** Streams with their outflow factors. */
export interface OutflowFit {
  streams: StayStream[];
  others: OutflowFactor;
  admitted: OutflowFactor;
  dayStartsAt: number;
  /** The day's factor in every cell, for a stream offset (admitted and boarding share one). */
  factorByCell: (stream: number) => Float64Array;
}

function groupOf(stream: number): OutflowGroup {
  return stream === admittedStream || stream === boardingStream ? 'admitted' : 'others';
}

/**
 * Departures and their compensator by day, one group of streams. Boarding is part of the admitted stay and not counted
 * twice: in a staged area it alone tells how the wards take patients, elsewhere the whole admitted stay.
 */
function daily(
  cells: BlockCells,
  days: Int32Array,
  span: { from: number; to: number },
  tallies: StayTallies,
  compensator: readonly Float64Array[],
  group: OutflowGroup,
  staged: readonly boolean[],
): DailyOutflow {
  const firstDay = days[0];
  const size = days[days.length - 1] - firstDay + 1;
  const departures = new Float64Array(size);
  const expected = new Float64Array(size);
  for (let index = 0; index < compensator.length; index += 1) {
    const stream = index % streamsPerArea;
    const twice = staged[Math.floor(index / streamsPerArea)] ? admittedStream : boardingStream;
    if (stream === twice || groupOf(stream) !== group) continue;
    for (let c = 0; c < days.length; c += 1) {
      departures[days[c] - firstDay] += tallies.departures[index][c];
      expected[days[c] - firstDay] += compensator[index][c];
    }
  }
  const inside: number[] = [];
  for (let d = 0; d < size; d += 1) if (expected[d] > 0.5) inside.push(d);
  // Past the last arrival used, only the longest stays remain to be seen: those days say little and not about a typical mix.
  const lastDay = days[Math.max(0, cells.startAt.findLastIndex((at) => at < span.to) - 1)] - firstDay;
  const kept = inside.filter((d) => d <= lastDay);
  return {
    day: Int32Array.from(kept, (d) => d + firstDay),
    departures: Float64Array.from(kept, (d) => departures[d]),
    expected: Float64Array.from(kept, (d) => expected[d]),
  };
}

function spread(days: Int32Array, outflow: DailyOutflow, factor: OutflowFactor): Float64Array {
  const smooth = smoothOutflow(outflow, factor);
  const byDay = new Map<number, number>();
  outflow.day.forEach((day, i) => byDay.set(day, smooth[i]));
  return Float64Array.from(days, (day) => byDay.get(day) ?? 1);
}

/**
 * Fits streams and outflow factors in turn: hazards given the factors, then the factors' variance and correlation from
 * departures against expected, then each day's factor by smoothing. The day is cut at midnight or at 04:00, whichever
 * leaves the factor more of the variance to explain.
 * @param staged by area, whether boarding is a stage of its own.
 * @param compensate departures expected in every cell at factor 1, [stream][cell], for streams and the factors they were fitted with.
 */
export function fitOutflowByDay(
  cells: BlockCells,
  span: { from: number; to: number },
  staged: readonly boolean[],
  fitStreams: (factorByCell: (stream: number) => Float64Array) => StayStream[],
  rounds: number,
  tallies: StayTallies,
  compensate: (
    streams: readonly StayStream[],
    factorByCell: (stream: number) => Float64Array,
  ) => readonly Float64Array[],
): OutflowFit {
  const ones = new Float64Array(cells.block.length).fill(1);
  let streams = fitStreams(() => ones);
  let compensator = compensate(streams, () => ones);
  // Whole stays decide where the day begins: on generated logs they found it where boarding alone did not.
  const whole = staged.map(() => false);
  const first = [cells.dayAtMidnight, cells.dayAtFour].map((days) =>
    (['others', 'admitted'] as const).reduce(
      (sum, group) => sum + estimateOutflow(daily(cells, days, span, tallies, compensator, group, whole)).variance,
      0,
    ),
  );
  const dayStartsAt = first[1] > first[0] ? 4 : 0;
  const days = dayStartsAt === 4 ? cells.dayAtFour : cells.dayAtMidnight;
  for (let round = 0; ; round += 1) {
    const others = daily(cells, days, span, tallies, compensator, 'others', staged);
    const admitted = daily(cells, days, span, tallies, compensator, 'admitted', staged);
    const factors = { others: estimateOutflow(others), admitted: estimateOutflow(admitted) };
    const byCell = { others: spread(days, others, factors.others), admitted: spread(days, admitted, factors.admitted) };
    const factorByCell = (stream: number): Float64Array => byCell[groupOf(stream)];
    streams = fitStreams(factorByCell);
    if (round + 1 >= rounds) return { streams, ...factors, dayStartsAt, factorByCell };
    compensator = compensate(streams, factorByCell);
  }
}
