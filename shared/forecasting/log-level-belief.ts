import type { ArrivalModel, EffectPrior, LevelState, RateGrid } from './arrival-model.ts';
import { blockCuts, blockOf } from './block-series.ts';
import { effectPrior, effectsOfDay, indexCalendar, type CalendarIndex } from './calendar-effect.ts';
import { firstEffect } from './level-filter.ts';
import type { CalendarDay } from './visit-table.ts';

/** Joint normal belief about the log multiplier of each block that a grid touches, factors apart. */
export interface BlockBelief {
  mean: Float64Array;
  /** Row-major, blocks × blocks. */
  covariance: Float64Array;
}

/** A level's belief, and its covariance with the factor at the end of training. */
export interface LevelBelief extends BlockBelief {
  withFactor: Float64Array;
}

/** The blocks that a grid touches, each split where the date changes so that a day's effects act on its own hours only. */
export interface GridBlocks {
  /** Block number of each piece, ascending. */
  block: Int32Array;
  /** Local day of each piece. */
  day: Int32Array;
  /** Piece of each stretch of the grid. */
  place: Int32Array;
}

/** The calendar that a forecast goes by: what the model was fitted on, and what is now known of days to come. */
export function forecastCalendar(model: ArrivalModel, calendar: readonly CalendarDay[]): CalendarIndex {
  return indexCalendar([...calendar, ...model.calendar], model.holidayWeekday);
}

/** Pieces of a grid's time: runs of stretches within one block and one local day. */
export function gridBlocks(model: ArrivalModel, grid: RateGrid): GridBlocks {
  const cut = blockCuts[model.structure];
  const place = new Int32Array(grid.localHour.length);
  const blocks: number[] = [];
  const days: number[] = [];
  for (let i = 0; i < grid.localHour.length; i += 1) {
    const block = blockOf(grid.localHour[i], cut);
    const day = Math.floor(grid.localHour[i] / 24);
    if (blocks.at(-1) !== block || days.at(-1) !== day) {
      blocks.push(block);
      days.push(day);
    }
    place[i] = blocks.length - 1;
  }
  return { block: Int32Array.from(blocks), day: Int32Array.from(days), place };
}

/**
 * What a state at the end of training says of later blocks: mean and covariance of log level + effects for each piece.
 * The level gains variance for each day since the end, a spell fades; an effect not seen in training has its prior, the same
 * for all days that bear it.
 */
export function projectLevel(
  state: LevelState,
  effects: readonly EffectPrior[],
  moves: { levelVariancePerDay: number; spellVariance: number; spellCorrelationPerDay: number },
  model: ArrivalModel,
  pieces: GridBlocks,
  index: CalendarIndex,
  onlyKnownEffects: boolean,
): LevelBelief {
  const size = state.mean.length;
  const count = pieces.block.length;
  const cut = blockCuts[model.structure];
  const lastBlock = blockOf(model.endLocalHour - 1, cut);
  const ahead = Array.from(pieces.block, (block) => Math.max(0, ((block - lastBlock) * cut.hours) / 24));
  const places = new Map(effects.map(({ key }, i) => [key, firstEffect + i]));
  const unseen: EffectPrior[] = [];
  const rows: { at: number; value: number }[][] = [];
  for (let k = 0; k < count; k += 1) {
    const spell = moves.spellCorrelationPerDay ** ahead[k];
    const row = [
      { at: 0, value: 1 },
      { at: 2, value: spell },
    ];
    for (const [key, value] of effectsOfDay(index, pieces.day[k])) {
      let at = places.get(key);
      if (at === undefined && !onlyKnownEffects) {
        at = size + unseen.length;
        places.set(key, at);
        unseen.push(effectPrior(key, index, model.settings.seasonSd));
      }
      if (at !== undefined) row.push({ at, value });
    }
    rows.push(row);
  }
  const covarianceOf = (i: number, j: number): number => {
    if (i < size && j < size) return state.covariance[i * size + j];
    return i === j ? unseen[i - size].sd ** 2 : 0;
  };
  const meanOf = (i: number): number => (i < size ? state.mean[i] : unseen[i - size].mean);
  const mean = Float64Array.from(rows, (row) => row.reduce((sum, { at, value }) => sum + value * meanOf(at), 0));
  const covariance = new Float64Array(count * count);
  for (let k = 0; k < count; k += 1) {
    for (let l = 0; l <= k; l += 1) {
      const least = Math.min(ahead[k], ahead[l]);
      const rho = moves.spellCorrelationPerDay;
      const fresh = moves.spellVariance * (1 - rho ** (2 * least)) * rho ** (Math.max(ahead[k], ahead[l]) - least);
      let sum = moves.levelVariancePerDay * least + fresh;
      for (const a of rows[k]) for (const b of rows[l]) sum += a.value * b.value * covarianceOf(a.at, b.at);
      covariance[k * count + l] = sum;
      covariance[l * count + k] = sum;
    }
  }
  const withFactor = Float64Array.from(rows, (row) =>
    row.reduce((sum, { at, value }) => sum + (at < size ? value * state.covariance[at * size + 1] : 0), 0),
  );
  return { mean, covariance, withFactor };
}

/**
 * What is believed of the site's factor in each piece: the state's belief carried on by AR(1), or a fresh factor each
 * block. Pieces of one block share one factor. `carried` is how much of the state's factor is left in each piece.
 */
export function projectFactor(model: ArrivalModel, pieces: GridBlocks): BlockBelief & { carried: Float64Array } {
  const count = pieces.block.length;
  const size = model.site.mean.length;
  const rho = model.factorCorrelation;
  const variance = model.factorVariance;
  const lastBlock = blockOf(model.endLocalHour - 1, blockCuts[model.structure]);
  // The state's factor holds the areas' own too; the shared part of it is what is carried on.
  const total = model.settings.factorVariance;
  const share = total > 0 ? variance / total : 0;
  const known = size > 1 ? model.site.covariance[size + 1] * share : variance;
  const now = model.site.mean[1] * share;
  const mean = new Float64Array(count);
  const carried = new Float64Array(count);
  const covariance = new Float64Array(count * count);
  for (let k = 0; k < count; k += 1) {
    const ahead = Math.max(0, pieces.block[k] - lastBlock);
    carried[k] = share * rho ** ahead;
    mean[k] = now * rho ** ahead;
    for (let l = 0; l <= k; l += 1) {
      const since = Math.max(0, pieces.block[l] - lastBlock);
      const own = known * rho ** (2 * since) + variance * (1 - rho ** (2 * since));
      const value = own * rho ** (ahead - since);
      covariance[k * count + l] = value;
      covariance[l * count + k] = value;
    }
  }
  return { mean, covariance, carried };
}

/** A stationary AR(1) factor over the pieces: an area's own. */
export function stationaryFactor(variance: number, correlation: number, pieces: GridBlocks): BlockBelief {
  const count = pieces.block.length;
  const covariance = new Float64Array(count * count);
  for (let k = 0; k < count; k += 1) {
    for (let l = 0; l < count; l += 1) {
      covariance[k * count + l] = variance * correlation ** Math.abs(pieces.block[k] - pieces.block[l]);
    }
  }
  return { mean: new Float64Array(count), covariance };
}
