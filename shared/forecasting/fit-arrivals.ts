import type { ArrivalModel, ArrivalSettings, HourlyCounts } from './arrival-model.ts';
import { fitAreaOwn, noOwn, type AreaOwn } from './area-own.ts';
import { arrivalCautions } from './arrival-cautions.ts';
import { blockCuts, expectHourly, gatherBlocks, type HourlyExpectation } from './block-series.ts';
import { effectPriors, indexCalendar, type CalendarIndex } from './calendar-effect.ts';
import { checkHourlyCounts } from './check-hourly-counts.ts';
import { chooseDynamics, spellCorrelationPerDay } from './choose-dynamics.ts';
import { chooseHalfLife } from './choose-half-life.ts';
import { factorMoments } from './factor-moments.ts';
import { filterLevel, firstState, type LevelDynamics } from './level-filter.ts';
import { levelsByDay } from './levels-by-day.ts';
import { profileExposure, roughProfile } from './profile-exposure.ts';
import type { CalendarDay } from './visit-table.ts';
import { fitWeeklyProfile } from './weekly-profile.ts';

/** How level and factor move until they are chosen. */
const firstDynamics: LevelDynamics = {
  levelVariancePerDay: 3e-5,
  factorVariance: 3e-3,
  factorCorrelation: 0.3,
  spellVariance: 4e-4,
  spellCorrelationPerDay,
};
const weeksForSeason = 104;

/**
 * Fits the arrival model: λ(t) = profile[hour of week] · level(t) · season · calendar(day) · site factor · area factor.
 *
 * Profile by empirical Bayes (weekly-profile), level and effects by a filter over blocks (level-filter), the structure of
 * the factor and all speeds by the score of each block given those before it (choose-dynamics), areas beside the site by
 * their shares (area-own), their own variation by moments (factor-moments).
 * Settings given are taken as they are; the others are chosen on these counts alone.
 * Throws a RangeError naming the fault: not a number, negative counts, or less than two weeks observed.
 * Cost: linear in hours; about 1 s for three years and five areas.
 */
export function fitArrivals(input: {
  counts: HourlyCounts;
  calendar: readonly CalendarDay[];
  settings?: Partial<ArrivalSettings>;
  onProgress?: (share: number) => void;
}): ArrivalModel {
  const { counts, settings = {}, onProgress } = input;
  const weeks = checkHourlyCounts(counts);
  const areas = counts.counts.length;
  const coarse = weeks < 8;
  const firstDay = counts.firstLocalHour / 24;
  const days = counts.exposureHours.length / 24;

  const seasons =
    settings.seasonSd === undefined ? (weeks >= weeksForSeason ? [0.02, 0.1] : [0.02]) : [settings.seasonSd];
  const first = fitLevels(counts, indexCalendar(input.calendar, settings.holidayWeekday ?? 0), seasons[0]);
  onProgress?.(0.15);

  // Which weekday holidays resemble, and how wide the season's prior is, by the score of the whole series.
  let best = first;
  const holidayShapes = settings.holidayWeekday === undefined ? [0, 6, 7] : [settings.holidayWeekday];
  for (const seasonSd of seasons) {
    for (const holidayWeekday of holidayShapes) {
      const index = indexCalendar(input.calendar, holidayWeekday);
      const candidate = scoreLevels(counts, index, seasonSd, first.rough);
      if (candidate.score > best.score + 1e-9) best = candidate;
    }
  }
  const { index, seasonSd } = best;
  onProgress?.(0.25);

  const dayFactor = best.dayFactor;
  const halfLife =
    settings.profileHalfLifeWeeks === undefined
      ? chooseHalfLife(counts, index, dayFactor)
      : settings.profileHalfLifeWeeks;
  onProgress?.(0.4);

  // Twice round: the areas' own levels need a profile, the profile needs their levels.
  let own: AreaOwn[] = counts.counts.map(noOwn);
  if (areas > 1) {
    const rough = counts.counts.map((_, area) => roughProfile(profileExposure(counts, area, index, dayFactor, null)));
    const hourly = expectHourly(counts, rough, index);
    own = counts.counts.map((ownCounts, area) => fitAreaOwn(hourly, ownCounts, area, index));
  }
  onProgress?.(0.5);
  const profiles = counts.counts.map((_, area) => {
    const factor = areas > 1 ? dayFactor.map((value, day) => value * own[area].dayFactor[day]) : dayFactor;
    const sums = profileExposure(counts, area, index, factor, halfLife);
    return fitWeeklyProfile(sums.counts, sums.exposure, coarse);
  });
  onProgress?.(0.7);
  const hourly = expectHourly(
    counts,
    profiles.map(({ ratePerHour }) => ratePerHour),
    index,
  );
  if (areas > 1) {
    own = counts.counts.map((ownCounts, area) =>
      fitAreaOwn(hourly, ownCounts, area, index, { levelVariancePerDay: own[area].levelVariancePerDay }),
    );
  }

  const effects = effectPriors(index, firstDay, firstDay + days, seasonSd);
  const keys = effects.map(({ key }) => key);
  const settled = levelsByDay(hourly, index, effects, firstDynamics);
  const dynamics = chooseDynamics(hourly, index, keys, settled.effects, settings);
  onProgress?.(0.9);
  const series = gatherBlocks(hourly, blockCuts[dynamics.structure], index, keys);
  const { state } = filterLevel(series, dynamics, firstState(effects, dynamics.factorVariance, dynamics.spellVariance));

  const variation = splitVariation(counts, hourly, settled.dayFactor, own, dynamics);
  onProgress?.(1);
  const usedSettings: ArrivalSettings = {
    profileHalfLifeWeeks: halfLife,
    structure: dynamics.structure,
    levelVariancePerDay: dynamics.levelVariancePerDay,
    spellVariance: dynamics.spellVariance,
    factorVariance: dynamics.factorVariance,
    factorLogSdError: dynamics.factorLogSdError,
    factorCorrelation: dynamics.factorCorrelation,
    seasonSd,
    holidayWeekday: index.holidayWeekday,
  };
  return {
    version: 1,
    areas: profiles.map((profile, area) => ({
      profile,
      own: own[area].state,
      ownEffects: own[area].effects,
      ownLevelVariancePerDay: own[area].levelVariancePerDay,
      factorVariance: variation.own[area],
      factorCorrelation: dynamics.factorCorrelation,
      arrivals: counts.counts[area].reduce((sum, n) => sum + n, 0),
    })),
    firstLocalHour: counts.firstLocalHour,
    endLocalHour: counts.firstLocalHour + counts.exposureHours.length,
    weeksOfHistory: weeks,
    site: state,
    effects,
    levelVariancePerDay: dynamics.levelVariancePerDay,
    spellVariance: dynamics.spellVariance,
    spellCorrelationPerDay: dynamics.spellCorrelationPerDay,
    factorVariance: variation.shared,
    factorLogSdError: dynamics.factorLogSdError,
    factorCorrelation: dynamics.factorCorrelation,
    structure: dynamics.structure,
    holidayWeekday: index.holidayWeekday,
    calendar: input.calendar.map((entry) => ({ ...entry })),
    settings: usedSettings,
    structureScores: dynamics.scores,
    coarse,
    cautions: arrivalCautions(counts, weeks),
  };
}

interface Levels {
  index: CalendarIndex;
  seasonSd: number;
  rough: number[][];
  dayFactor: Float64Array;
  score: number;
}

/** Level and effects by day from a rough profile that is refined once. */
function fitLevels(counts: HourlyCounts, index: CalendarIndex, seasonSd: number): Levels {
  let dayFactor: Float64Array = new Float64Array(counts.exposureHours.length / 24).fill(1);
  let levels: Levels | undefined;
  for (let round = 0; round < 2; round += 1) {
    const factor = dayFactor;
    const rough = counts.counts.map((_, area) => roughProfile(profileExposure(counts, area, index, factor, null)));
    levels = scoreLevels(counts, index, seasonSd, rough);
    dayFactor = levels.dayFactor;
  }
  if (!levels) throw new RangeError('no round was made');
  return levels;
}

function scoreLevels(counts: HourlyCounts, index: CalendarIndex, seasonSd: number, rough: number[][]): Levels {
  const hourly = expectHourly(counts, rough, index);
  const firstDay = counts.firstLocalHour / 24;
  const priors = effectPriors(index, firstDay, firstDay + counts.exposureHours.length / 24, seasonSd);
  const { dayFactor, score } = levelsByDay(hourly, index, priors, firstDynamics);
  return { index, seasonSd, rough, dayFactor, score };
}

/** The factor's variance as found for the whole site, shared out between what areas share and what each has of its own. */
function splitVariation(
  counts: HourlyCounts,
  hourly: HourlyExpectation,
  dayFactor: Float64Array,
  own: readonly AreaOwn[],
  dynamics: LevelDynamics & { structure: ArrivalModel['structure'] },
): { shared: number; own: number[] } {
  const areas = counts.counts.length;
  if (areas === 1 || dynamics.factorVariance === 0) {
    return { shared: dynamics.factorVariance, own: counts.counts.map(() => 0) };
  }
  const expected = hourly.areaExpected.map((values, area) =>
    values.map((value, i) => value * dayFactor[Math.floor(i / 24)] * own[area].dayFactor[Math.floor(i / 24)]),
  );
  const moments = factorMoments(counts.counts, expected, hourly.firstLocalHour, blockCuts[dynamics.structure]);
  const sums = expected.map((values) => values.reduce((sum, value) => sum + value, 0));
  const all = sums.reduce((sum, value) => sum + value, 0);
  // What the areas' own factors add to the site's variance is already in it.
  const fromOwn = moments.own.reduce((sum, variance, area) => sum + variance * (sums[area] / all) ** 2, 0);
  const total = moments.shared + fromOwn;
  return { shared: total > 0 ? (dynamics.factorVariance * moments.shared) / total : 0, own: moments.own };
}
