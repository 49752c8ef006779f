import type { CalendarDay } from './visit-table.ts';

/**
 * Arrivals counted by local hour. Element i of every array is local hour `firstLocalHour + i`; the
 * first is a local midnight and the length is a multiple of 24, so that a day is 24 elements.
 */
export interface HourlyCounts {
  /** Local hours from 1970-01-01 00:00 on the wall clock; a multiple of 24. */
  firstLocalHour: number;
  /** Real elapsed hours that carry each label (2 in the repeated hour of autumn, 0 in the skipped one, 0 where nothing is known). */
  exposureHours: Float64Array;
  /** The same for each area, where outages or diversions took some away; absent when all areas share `exposureHours`. */
  areaExposure?: Float64Array[];
  /** Arrivals, per area. */
  counts: Float64Array[];
}

/** How a shared factor varies over time; the candidates that a fit chooses from by score on past data. */
export const factorStructures = [
  'none',
  'gamma by calendar day',
  'by day cut at 04:00, AR(1)',
  'log-AR(1) on 6 h blocks',
  'log-AR(1) on 4 h blocks',
] as const;
export type FactorStructure = (typeof factorStructures)[number];

/** What a fit may be told instead of choosing it on past data. */
export interface ArrivalSettings {
  /** Weeks after which a past count weighs half in the weekly profile; null weighs all alike. */
  profileHalfLifeWeeks: number | null;
  structure: FactorStructure;
  /** Variance that the log level gains a day. */
  levelVariancePerDay: number;
  /** Variance of the log of a spell of busy or quiet days. */
  spellVariance: number;
  /** Variance of the log of the site's factor. */
  factorVariance: number;
  /** Standard deviation of the log of the factor's standard deviation. */
  factorLogSdError: number;
  /** Correlation of the factor between neighbouring blocks. */
  factorCorrelation: number;
  /** Prior standard deviation of each first annual harmonic on the log scale; the second has half of it. 0 holds the season flat. */
  seasonSd: number;
  /** Weekday whose hourly shape a public holiday takes, ISO 1..7; 0 keeps its own weekday. */
  holidayWeekday: number;
}

/** A log-linear effect on the rate of a day, with its prior. */
export interface EffectPrior {
  /** `season sin 1`, `holiday`, `after holiday`, or `own:` or `before:` and the day's name. */
  key: string;
  mean: number;
  sd: number;
}

/** Gaussian belief about [log level, factor, spell, effects…] at the end of the training data. */
export interface LevelState {
  mean: number[];
  /** Row-major square matrix. */
  covariance: number[];
}

/** The weekly profile of one area: smooth log rate B·β and hours shrunk to it. */
export interface WeeklyProfile {
  /** Posterior mean rate of each hour of the week at level 1, arrivals an hour. */
  ratePerHour: number[];
  /** Standard deviation of the log rate that each hour has of its own. */
  logSd: number[];
  /** Weight of the smooth profile in each hour's rate, 0..1. */
  smoothWeight: number[];
  /** Lower Cholesky factor of the covariance of β, row-major; see weekly-basis. */
  basisFactor: number[];
  basisSize: number;
  /** Gamma shape of an hour's own rate about the smooth one: large means strongly shrunk. */
  shrinkage: number;
}

export interface AreaModel {
  profile: WeeklyProfile;
  /** Belief about the area's own [log level, 0, 0, effects…] beside the site's. */
  own: LevelState;
  ownEffects: EffectPrior[];
  ownLevelVariancePerDay: number;
  /** Variance of the log of the area's own factor. */
  factorVariance: number;
  factorCorrelation: number;
  /** Arrivals counted in training. */
  arrivals: number;
}

/** The fitted arrival model of a site: plain JSON, everything that a forecast or a draw needs. */
export interface ArrivalModel {
  version: 1;
  areas: AreaModel[];
  /** Local hour just after the last one used. */
  endLocalHour: number;
  firstLocalHour: number;
  /** Hours observed, in weeks. */
  weeksOfHistory: number;
  site: LevelState;
  effects: EffectPrior[];
  levelVariancePerDay: number;
  /** Spells of busy or quiet days: an AR(1) of this stationary variance beside the level, which comes back. */
  spellVariance: number;
  spellCorrelationPerDay: number;
  factorVariance: number;
  /** Standard deviation of the log of the factor's standard deviation: how well the variation is known. */
  factorLogSdError: number;
  factorCorrelation: number;
  structure: FactorStructure;
  holidayWeekday: number;
  /** Days of the calendar used in the fit. */
  calendar: CalendarDay[];
  settings: ArrivalSettings;
  /** Log score per hour (joint, one block ahead) of each candidate structure on the training data; lower is better. */
  structureScores: { structure: FactorStructure; logScore: number }[];
  /** True below eight weeks: a coarse profile, to be used for 24 h at most. */
  coarse: boolean;
  cautions: string[];
}

/** Stretches of time between full local hours, for which rates are wanted. */
export interface RateGrid {
  /** The local hour each stretch carries. */
  localHour: Int32Array;
  /** Its start, UTC seconds, ascending. */
  startAt: Float64Array;
  /** Its real length, hours. */
  hours: Float64Array;
}

/** Arrivals counted since the end of the training data, to tell how today runs. */
export interface LiveArrivals {
  /** Stretches that were counted, before the forecast's own. */
  grid: RateGrid;
  /** Arrivals of the whole site in each stretch of the grid, or one number for all of it. */
  total: number | number[];
}
