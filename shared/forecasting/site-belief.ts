import type { ArrivalModel, LiveArrivals, RateGrid } from './arrival-model.ts';
import { profileHour, type CalendarIndex } from './calendar-effect.ts';
import { conditionOnCounts, liveGammaFactor } from './live-factor.ts';
import { gridBlocks, projectFactor, projectLevel, stationaryFactor, type BlockBelief } from './log-level-belief.ts';

/** Everything normal about a forecast's log rates, for the pieces of its own grid. */
export interface ForecastBelief {
  /** Piece of each stretch of the forecast's grid. */
  place: Int32Array;
  pieces: number;
  /** Joint over [site's log multiplier per piece, its factor's part per piece]; the gamma structure has no factor part. */
  site: BlockBelief;
  hasFactor: boolean;
  /** Gamma factor of each piece's day under the gamma structure; pieces of one day share it. */
  gamma: { shape: number; rate: number; day: number }[] | null;
  /** Each area's own log multiplier per piece. */
  own: BlockBelief[];
}

/**
 * The joint belief about level, effects and factors over a forecast's grid, after arrivals already counted.
 * Arrivals counted before the forecast inform the level and the factor of every later block, across midnight too; under
 * the gamma structure they inform the day's own gamma factor by its conjugate update.
 */
export function forecastBelief(
  model: ArrivalModel,
  grid: RateGrid,
  index: CalendarIndex,
  live?: LiveArrivals,
): ForecastBelief {
  const counted = live ? live.grid.localHour.length : 0;
  const whole = live ? joinGrids(live.grid, grid) : grid;
  const pieces = gridBlocks(model, whole);
  const count = pieces.block.length;
  const level = projectLevel(model.site, model.effects, model, model, pieces, index, false);
  const isGamma = model.structure === 'gamma by calendar day';
  const hasFactor = !isGamma && model.factorVariance > 0;

  let site: BlockBelief = level;
  if (hasFactor) {
    const factor = projectFactor(model, pieces);
    const size = 2 * count;
    const mean = new Float64Array(size);
    const covariance = new Float64Array(size * size);
    for (let k = 0; k < count; k += 1) {
      mean[k] = level.mean[k] + factor.mean[k];
      mean[count + k] = factor.mean[k];
      for (let l = 0; l < count; l += 1) {
        const own = factor.covariance[k * count + l];
        const crossKl = level.withFactor[k] * factor.carried[l];
        const crossLk = level.withFactor[l] * factor.carried[k];
        covariance[k * size + l] = level.covariance[k * count + l] + own + crossKl + crossLk;
        covariance[k * size + count + l] = own + crossKl;
        covariance[(count + l) * size + k] = own + crossKl;
        covariance[(count + k) * size + count + l] = own;
      }
    }
    site = { mean, covariance };
  }

  const gamma = isGamma ? Array.from(pieces.day, (day) => ({ shape: 0, rate: 0, day })) : null;
  const phi = isGamma ? Math.expm1(model.factorVariance) : 0;
  if (live) {
    const expected = expectedByPiece(model, live.grid, index, pieces.place, site.mean.length);
    if (gamma) {
      const byDay = new Map<number, { count: number; expected: number }>();
      forEachCount(live, (from, to, n) => {
        const parts = new Map<number, number>();
        let all = 0;
        for (let i = from; i < to; i += 1) {
          const at = pieces.place[i];
          const mean = expected[i] * Math.exp(level.mean[at] + level.covariance[at * count + at] / 2);
          parts.set(pieces.day[at], (parts.get(pieces.day[at]) ?? 0) + mean);
          all += mean;
        }
        for (const [day, mean] of parts) {
          const known = byDay.get(day) ?? { count: 0, expected: 0 };
          // A count over several days is shared out as expected: it cannot tell one day's factor from another's.
          byDay.set(day, { count: known.count + (all > 0 ? (n * mean) / all : 0), expected: known.expected + mean });
        }
      });
      for (const piece of gamma) {
        const known = byDay.get(piece.day);
        if (known && phi > 0) Object.assign(piece, liveGammaFactor(phi, known.count, known.expected));
      }
    } else {
      const observations: { count: number; expected: Float64Array }[] = [];
      forEachCount(live, (from, to, n) => {
        const row = new Float64Array(site.mean.length);
        for (let i = from; i < to; i += 1) row[pieces.place[i]] += expected[i];
        observations.push({ count: n, expected: row });
      });
      site = conditionOnCounts(site, observations);
    }
  }
  if (gamma) {
    for (const piece of gamma)
      if (piece.shape === 0 && phi > 0) Object.assign(piece, { shape: 1 / phi, rate: 1 / phi });
  }

  // Only the pieces that the forecast itself touches are drawn.
  const first = counted < whole.localHour.length ? pieces.place[counted] : 0;
  const kept = count - first;
  const keep = [...Array(kept).keys()].map((k) => first + k);
  const own = model.areas.map((area) => {
    const moves = { levelVariancePerDay: area.ownLevelVariancePerDay, spellVariance: 0, spellCorrelationPerDay: 0 };
    const belief = projectLevel(area.own, area.ownEffects, moves, model, pieces, index, true);
    const factor = stationaryFactor(area.factorVariance, area.factorCorrelation, pieces);
    return selectPieces(
      { mean: belief.mean, covariance: belief.covariance.map((value, i) => value + factor.covariance[i]) },
      keep,
    );
  });
  return {
    place: pieces.place.slice(counted).map((at) => at - first),
    pieces: kept,
    site: selectPieces(site, hasFactor ? [...keep, ...keep.map((k) => count + k)] : keep),
    hasFactor,
    gamma: gamma ? gamma.slice(first) : null,
    own,
  };
}

function joinGrids(a: RateGrid, b: RateGrid): RateGrid {
  return {
    localHour: Int32Array.of(...a.localHour, ...b.localHour),
    startAt: Float64Array.of(...a.startAt, ...b.startAt),
    hours: Float64Array.of(...a.hours, ...b.hours),
  };
}

function selectPieces(belief: BlockBelief, keep: readonly number[]): BlockBelief {
  const size = belief.mean.length;
  const covariance = new Float64Array(keep.length * keep.length);
  keep.forEach((k, i) => keep.forEach((l, j) => (covariance[i * keep.length + j] = belief.covariance[k * size + l])));
  return { mean: Float64Array.from(keep, (k) => belief.mean[k]), covariance };
}

/** Arrivals expected in each stretch at site multiplier 1, areas' own means multiplied in. */
function expectedByPiece(
  model: ArrivalModel,
  grid: RateGrid,
  index: CalendarIndex,
  place: Int32Array,
  size: number,
): Float64Array {
  if (place.length < grid.localHour.length || size === 0) throw new RangeError('live grid is longer than its pieces');
  return Float64Array.from(grid.localHour, (localHour, i) => {
    const hour = profileHour(index, localHour);
    let rate = 0;
    for (const area of model.areas) {
      rate +=
        area.profile.ratePerHour[hour] *
        Math.exp(area.own.mean[0] + (area.factorVariance + area.own.covariance[0]) / 2);
    }
    return rate * grid.hours[i];
  });
}

/** Calls back with each counted span: its stretches and its arrivals. */
function forEachCount(live: LiveArrivals, use: (from: number, to: number, count: number) => void): void {
  const length = live.grid.localHour.length;
  if (typeof live.total === 'number') {
    if (!(live.total >= 0 && live.total < Infinity))
      throw new RangeError(`live arrivals must be 0 or more, got ${live.total}`);
    use(0, length, live.total);
    return;
  }
  if (live.total.length !== length)
    throw new RangeError(`live arrivals: ${live.total.length} counts for ${length} stretches`);
  live.total.forEach((count, i) => {
    if (!(count >= 0 && count < Infinity)) throw new RangeError(`live arrivals: stretch ${i} is ${count}`);
    use(i, i + 1, count);
  });
}
