import type { CollectedStays } from './collect-stays.ts';
import type { BlockCells } from './stay-clock.ts';
import { cellAt } from './stay-clock.ts';
import { blockHazards, streamsPerArea } from './stay-model.ts';
import type { StayShape, StayStream } from './stay-model.ts';
import { clockAt, hazardAt } from './stay-shape.ts';

/** Operational time ∫ μ·g·f dt at the start of every cell and the end of the last, [stream][cell], in means of the stream. */
export function operationalClock(
  cells: BlockCells,
  streams: readonly StayStream[],
  factorByCell: (stream: number) => Float64Array,
): Float64Array[] {
  return streams.map((stream) => {
    const hazards = blockHazards(stream);
    const factors = factorByCell(stream.stream);
    const times = new Float64Array(cells.block.length + 1);
    for (let c = 0; c < cells.block.length; c += 1) {
      times[c + 1] =
        times[c] + (hazards[cells.block[c]] * factors[c] * (cells.startAt[c + 1] - cells.startAt[c])) / 3600;
    }
    return times;
  });
}

/**
 * Departures expected in every cell given who was there and for how long, at outflow factor 1: Σ ΔH(X) / f over the stays
 * at risk, H the cumulative hazard of the stays' own shape in operational time X. Departures minus f times it is a
 * martingale (Aalen 1978), whose variance is its mean. With H of the exponential, stays that are more even than that would
 * make the outflow look steadier than it is, and busy mornings would pass for slow days.
 * @returns [stream][cell]. Cost: linear in stays times the cells a stay crosses.
 */
export function compensateStays(
  stays: CollectedStays,
  cells: BlockCells,
  blockHours: number,
  fit: {
    clock: readonly Float64Array[];
    shapes: readonly (StayShape | null)[];
    factorByCell: (stream: number) => Float64Array;
  },
): Float64Array[] {
  const { startAt } = cells;
  const { clock, shapes } = fit;
  const expected = clock.map(() => new Float64Array(startAt.length - 1));
  for (let i = 0; i < stays.length; i += 1) {
    const index = stays.stream[i];
    const times = clock[index];
    const shape = shapes[index];
    const out = expected[index];
    const last = cellAt(cells, stays.endAt[i], blockHours);
    const begin = clockAt(times, cells, stays.startAt[i], blockHours);
    let before = 0;
    for (let cell = cellAt(cells, stays.startAt[i], blockHours); cell < last; cell += 1) {
      const after = hazardAt(shape, times[cell + 1] - begin);
      out[cell] += after - before;
      before = after;
    }
    out[last] += hazardAt(shape, clockAt(times, cells, stays.endAt[i], blockHours) - begin) - before;
  }
  expected.forEach((out, index) => {
    const factors = fit.factorByCell(index % streamsPerArea);
    for (let c = 0; c < out.length; c += 1) out[c] /= factors[c];
  });
  return expected;
}
