import type { CollectedStays } from './collect-stays.ts';
import type { BlockCells } from './stay-clock.ts';
import { cellAt } from './stay-clock.ts';
import type { StayShape } from './stay-model.ts';

const binWidth = 0.02;
const bins = 800;
const step = 1 / 16;
/** Fewer departures than this say too little about a shape. */
const fewestDepartures = 200;
/** The table ends where fewer than this are still at risk. */
const fewestAtRisk = 25;

/**
 * The shapes of the stays, all streams at once: Kaplan & Meier (1958) survival in operational time X = ∫ μ·g·f dt, in
 * which departures by block of the day and days of slow outflow are already allowed for, binned at 0.02 of a mean stay.
 * @param clock operational time at the start of every cell, [stream][cell], one more entry than cells, in means of the stream.
 * @returns one shape a stream, null where fewer than 200 departures. Cost: linear in stays.
 */
export function fitStayShapes(
  stays: Pick<CollectedStays, 'length' | 'stream' | 'startAt' | 'endAt' | 'departed'>,
  cells: BlockCells,
  blockHours: number,
  clock: readonly Float64Array[],
): (StayShape | null)[] {
  const deaths = clock.map(() => new Float64Array(bins));
  const losses = clock.map(() => new Float64Array(bins));
  for (let i = 0; i < stays.length; i += 1) {
    const times = clock[stays.stream[i]];
    const stay = clockAt(times, cells, stays.endAt[i], blockHours);
    const age = stay - clockAt(times, cells, stays.startAt[i], blockHours);
    const bin = Math.min(bins - 1, Math.max(0, Math.floor(age / binWidth)));
    if (stays.departed[i] === 1) deaths[stays.stream[i]][bin] += 1;
    else losses[stays.stream[i]][bin] += 1;
  }
  return clock.map((_, index) => shapeOf(deaths[index], losses[index]));
}

/** Operational time at an instant, linear within a cell. @param times at the start of every cell and the end of the last */
export function clockAt(times: Float64Array, cells: BlockCells, at: number, blockHours: number): number {
  const { startAt } = cells;
  const cell = cellAt(cells, at, blockHours);
  const share = (at - startAt[cell]) / (startAt[cell + 1] - startAt[cell]);
  return times[cell] + share * (times[cell + 1] - times[cell]);
}

/** Inverse cumulative hazard from binned departures and censorings; losses count half at risk within their bin. */
function shapeOf(deaths: Float64Array, losses: Float64Array): StayShape | null {
  let total = 0;
  let atRisk = 0;
  for (let bin = 0; bin < bins; bin += 1) {
    total += deaths[bin];
    atRisk += deaths[bin] + losses[bin];
  }
  if (total < fewestDepartures) return null;
  const stays = [0];
  let hazard = 0;
  let tailDeaths = 0;
  let tailTime = 0;
  const tailFrom = total * 0.1;
  for (let bin = 0; bin < bins && atRisk > fewestAtRisk; bin += 1) {
    const exposed = atRisk - losses[bin] / 2;
    const rise = deaths[bin] < exposed ? -Math.log1p(-deaths[bin] / exposed) : 0;
    if (atRisk <= Math.max(tailFrom, 4 * fewestAtRisk)) {
      tailDeaths += deaths[bin];
      tailTime += (atRisk - (deaths[bin] + losses[bin]) / 2) * binWidth;
    }
    while (rise > 0 && stays.length * step <= hazard + rise) {
      const within = (stays.length * step - hazard) / rise;
      stays.push((bin + within) * binWidth);
    }
    hazard += rise;
    atRisk -= deaths[bin] + losses[bin];
  }
  const tail = tailDeaths > 0 ? tailTime / tailDeaths : 1;
  return stays.length > 4 ? { step, stays, tail: Math.min(20, Math.max(0.05, tail)) } : null;
}

/** The stay, in means, at a cumulative hazard: the identity without a shape. */
export function stayAt(shape: StayShape | null, hazard: number): number {
  if (shape === null) return hazard;
  const place = hazard / shape.step;
  const last = shape.stays.length - 1;
  if (place >= last) return shape.stays[last] + (hazard - last * shape.step) * shape.tail;
  const index = Math.floor(place);
  return shape.stays[index] + (place - index) * (shape.stays[index + 1] - shape.stays[index]);
}

/** The cumulative hazard at a stay, in means: the inverse of `stayAt`. Cost: a binary search. */
export function hazardAt(shape: StayShape | null, stay: number): number {
  if (shape === null) return stay;
  const last = shape.stays.length - 1;
  if (stay >= shape.stays[last]) return last * shape.step + (stay - shape.stays[last]) / shape.tail;
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (shape.stays[middle] <= stay) low = middle;
    else high = middle;
  }
  const width = shape.stays[high] - shape.stays[low];
  return shape.step * (low + (width > 0 ? (stay - shape.stays[low]) / width : 0));
}
