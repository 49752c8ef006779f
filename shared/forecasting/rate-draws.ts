import { drawGamma } from '../stochastic/gamma.ts';
import type { RandomStream } from '../stochastic/random.ts';
import type { ArrivalModel, LiveArrivals, RateGrid } from './arrival-model.ts';
import { profileHour } from './calendar-effect.ts';
import { choleskyFactor } from './cholesky.ts';
import { forecastCalendar } from './log-level-belief.ts';
import { profileError, type ProfileError } from './profile-error.ts';
import { drawQuickNormal, fillQuickNormals } from './quick-normal.ts';
import { takeWords } from './quick-stream.ts';
import { distinctHoursOfWeek } from './rate-grid.ts';
import { forecastBelief, type ForecastBelief } from './site-belief.ts';
import type { CalendarDay } from './visit-table.ts';

/**
 * Mean arrivals per hour of every area in every stretch of a grid, all random factors at their mean.
 * @returns per area, one figure a stretch, arrivals an hour. Cost: pieces² once, then linear.
 */
export function expectedRates(
  model: ArrivalModel,
  grid: RateGrid,
  calendar: readonly CalendarDay[],
  live?: LiveArrivals,
): Float64Array[] {
  const index = forecastCalendar(model, calendar);
  const belief = forecastBelief(model, grid, index, live);
  const site = meanMultipliers(model, belief);
  return model.areas.map(({ profile }, area) => {
    const own = belief.own[area];
    return Float64Array.from(grid.localHour, (localHour, i) => {
      const at = belief.place[i];
      const factor = Math.exp(own.mean[at] + own.covariance[at * belief.pieces + at] / 2);
      return profile.ratePerHour[profileHour(index, localHour)] * site[at] * factor;
    });
  });
}

function meanMultipliers(model: ArrivalModel, belief: ForecastBelief): Float64Array {
  const size = belief.site.mean.length;
  return Float64Array.from({ length: belief.pieces }, (_, k) => {
    const mean = Math.exp(belief.site.mean[k] + belief.site.covariance[k * size + k] / 2);
    const gamma = belief.gamma?.[k];
    if (!gamma || gamma.shape === 0) return mean;
    return mean * Math.exp(model.factorVariance / 2) * (gamma.shape / gamma.rate);
  });
}

/** The common terms of an error column by column, filled up with zeros to a multiple of three columns. */
function columnsOf({ rank, common }: ProfileError, hours: number): Float64Array {
  return Float64Array.from({ length: roundedRank(rank) * hours }, (_, i) => {
    const column = Math.floor(i / hours);
    return column < rank ? common[(i % hours) * rank + column] : 0;
  });
}

function roundedRank(rank: number): number {
  return 3 * Math.ceil(rank / 3);
}

/** Standard deviation of the sum of two uniforms on 0..65535, inverted. */
const triangularScale = Math.sqrt(6 / (65_536 ** 2 - 1));

/**
 * Makes a function that fills `out` (per area, one rate per stretch) with one joint draw of the rates of all areas and
 * stretches: error of the weekly profile, level and its drift since training, season, calendar effects, the shared factor
 * and each area's own, and the error of the shared factor's variance; after arrivals already counted, if any.
 * Means agree with `expectedRates`. A draw makes no garbage; the words it takes vary, so replications are paired by a
 * stream seeded anew for each.
 * Cost: making, pieces³; a draw, areas × (stretches + pieces²/2), about 6 µs for 5 areas × 36 stretches.
 */
export function makeRateDraw(
  model: ArrivalModel,
  grid: RateGrid,
  calendar: readonly CalendarDay[],
  live?: LiveArrivals,
): (stream: RandomStream, out: Float64Array[]) => void {
  const index = forecastCalendar(model, calendar);
  const belief = forecastBelief(model, grid, index, live);
  const { pieces, place, hasFactor, gamma } = belief;
  const stretches = place.length;
  const siteSize = belief.site.mean.length;
  const siteFactor = choleskyFactor(belief.site.covariance, siteSize);
  const siteMean = belief.site.mean;
  // exp(u) has mean exp(σ²/2); the gamma factor, whose mean is 1, stands for it at the same level.
  const gammaShift = gamma ? model.factorVariance / 2 : 0;
  const sdError = hasFactor ? model.factorLogSdError : 0;

  const hours = grid.localHour.map((localHour) => profileHour(index, localHour));
  const distinct = distinctHoursOfWeek(hours);
  const areas = model.areas.map((area, a) => {
    const error = profileError(area.profile, distinct.hours, model.coarse);
    const own = belief.own[a];
    const flat = own.covariance.every((value) => value === 0);
    return {
      logRate: Float64Array.from(
        distinct.hours,
        (hour, i) => Math.log(area.profile.ratePerHour[hour]) - error.variance[i] / 2,
      ),
      error,
      columns: columnsOf(error, distinct.hours.length),
      ownMean: own.mean,
      ownFactor: flat ? null : choleskyFactor(own.covariance, pieces),
    };
  });

  const z = new Float64Array(Math.max(siteSize, pieces, ...areas.map(({ error }) => roundedRank(error.rank))));
  const site = new Float64Array(pieces);
  const own = new Float64Array(pieces);
  const hourLog = new Float64Array(distinct.hours.length);
  const hourWords = new Uint32Array(hourLog.length);
  const hourPlace = distinct.place;

  /** What all areas share, by piece. */
  function drawSite(stream: RandomStream): void {
    fillQuickNormals(stream, z, siteSize);
    const scale = sdError > 0 ? Math.exp(sdError * drawQuickNormal(stream)) - 1 : 0;
    for (let k = 0; k < pieces; k += 1) {
      let x = siteMean[k] + gammaShift;
      for (let j = 0; j <= k; j += 1) x += siteFactor[k * siteSize + j] * z[j];
      if (scale !== 0) {
        let u = 0;
        const row = (pieces + k) * siteSize;
        for (let j = 0; j <= pieces + k; j += 1) u += siteFactor[row + j] * z[j];
        x += scale * u;
      }
      site[k] = x;
    }
    if (!gamma) return;
    for (let k = 0; k < pieces; k += 1) {
      const { shape, rate, day } = gamma[k];
      if (shape === 0) continue;
      // Pieces of one day share its factor.
      const log = k > 0 && gamma[k - 1].day === day ? z[0] : Math.log(drawGamma(stream, shape) / rate);
      z[0] = log;
      site[k] += log;
    }
  }

  function drawOwn(stream: RandomStream, mean: Float64Array, factor: Float64Array | null): void {
    // Local names, here and below: captured ones are looked up again at every store.
    const normals = z;
    const shared = site;
    const to = own;
    const count = pieces;
    if (factor === null) {
      for (let k = 0; k < count; k += 1) to[k] = shared[k] + mean[k];
      return;
    }
    fillQuickNormals(stream, z, count);
    for (let k = 0; k < count; k += 1) {
      let x = shared[k] + mean[k];
      for (let j = 0; j <= k; j += 1) x += factor[k * count + j] * normals[j];
      to[k] = x;
    }
  }

  /** Log rates by distinct hour with the weekly profile's error. */
  function drawProfile(stream: RandomStream, logRate: Float64Array, error: ProfileError, columns: Float64Array): void {
    const { rank, ownSd } = error;
    fillQuickNormals(stream, z, rank);
    const normals = z;
    const to = hourLog;
    const count = hourLog.length;
    const words = hourWords;
    takeWords(stream, words, count);
    for (let h = 0; h < count; h += 1) {
      // Two uniforms of 16 bits make a triangular error of mean 0 and variance 1 at less than a normal's cost; there is one
      // an hour and area, each a few per cent, and every count or sum of them is bell-shaped all the same.
      const bits = words[h];
      to[h] = logRate[h] + ownSd[h] * (((bits >>> 16) + (bits & 0xffff) - 65_535) * triangularScale);
    }
    // By columns, three at a time: sums along a row would each wait for the last.
    for (let r = 0, at = 0; r < rank; r += 3, at += 3 * count) {
      const first = normals[r];
      const second = normals[r + 1];
      const third = normals[r + 2];
      for (let h = 0; h < count; h += 1) {
        to[h] += columns[at + h] * first + columns[at + count + h] * second + columns[at + 2 * count + h] * third;
      }
    }
  }

  return (stream, out) => {
    drawSite(stream);
    for (let a = 0; a < areas.length; a += 1) {
      const { logRate, error, columns, ownMean, ownFactor } = areas[a];
      drawOwn(stream, ownMean, ownFactor);
      drawProfile(stream, logRate, error, columns);
      const rates = out[a];
      const logs = hourLog;
      const offsets = own;
      const hourAt = hourPlace;
      const pieceAt = place;
      for (let i = 0; i < stretches; i += 1) rates[i] = Math.exp(logs[hourAt[i]] + offsets[pieceAt[i]]);
    }
  };
}
