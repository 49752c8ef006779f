import type { ArrivalModel, EffectPrior, HourlyCounts, LevelState } from './arrival-model.ts';
import { shareSeries } from './area-own.ts';
import { blockCuts, blockOf, expectHourly, gatherBlocks } from './block-series.ts';
import { effectPriors, indexCalendar } from './calendar-effect.ts';
import { firstEffect, filterLevel } from './level-filter.ts';

/**
 * Moves the level of an approved model on by arrivals counted since its end: level, spell, factor, season, calendar
 * effects and the areas' own levels are filtered on; profile, structure, speeds and variances stay as approved.
 *
 * @param counts may begin before the model's end (what is known already is passed over) or after it (the level then
 *   grows less certain over the hours between)
 * @returns a new model; the same one if the counts hold nothing newer.
 * Throws a RangeError when the number of areas differs. Cost: linear in the new hours.
 */
export function refreshLevel(model: ArrivalModel, counts: HourlyCounts): ArrivalModel {
  const areas = model.areas.length;
  if (counts.counts.length !== areas) {
    throw new RangeError(`counts hold ${counts.counts.length} areas, the model ${areas}`);
  }
  const end = counts.firstLocalHour + counts.exposureHours.length;
  if (end <= model.endLocalHour) return model;
  const later = hoursFrom(counts, model.endLocalHour, end);
  const index = indexCalendar(model.calendar, model.holidayWeekday);
  const hourly = expectHourly(
    later,
    model.areas.map(({ profile }) => profile.ratePerHour),
    index,
  );
  const cut = blockCuts[model.structure];
  const sameBlock = blockOf(model.endLocalHour, cut) === blockOf(model.endLocalHour - 1, cut);

  // The site's filter knows the whole factor; what areas have of their own is set aside again when drawing.
  const { effects, state } = withNewEffects(
    model,
    effectPriors(index, model.endLocalHour / 24, Math.ceil(end / 24), model.settings.seasonSd),
  );
  const series = gatherBlocks(
    hourly,
    cut,
    index,
    effects.map(({ key }) => key),
  );
  const dynamics = { ...model, factorVariance: model.settings.factorVariance };
  const site = filterLevel(series, dynamics, state, { sameBlock }).state;

  const areaModels = model.areas.map((area, a) => {
    const arrivals = area.arrivals + later.counts[a].reduce((sum, n) => sum + n, 0);
    if (areas === 1) return { ...area, arrivals };
    const { series: shares, informationScale } = shareSeries(hourly, later.counts[a], a, index);
    const moves = {
      levelVariancePerDay: area.ownLevelVariancePerDay,
      factorVariance: area.factorVariance,
      factorCorrelation: 0,
      spellVariance: 0,
      spellCorrelationPerDay: 0,
    };
    return { ...area, arrivals, own: filterLevel(shares, moves, area.own, { informationScale }).state };
  });
  const seen = later.exposureHours.reduce((sum, hours) => sum + hours, 0) / 168;
  return {
    ...model,
    site,
    effects,
    areas: areaModels,
    endLocalHour: end,
    weeksOfHistory: model.weeksOfHistory + seen,
  };
}

/** Hours [from, to) of the counts, without exposure where they hold none. */
function hoursFrom(counts: HourlyCounts, from: number, to: number): HourlyCounts {
  const pick = (values: Float64Array): Float64Array =>
    Float64Array.from({ length: to - from }, (_, i) => {
      const at = from + i - counts.firstLocalHour;
      return at >= 0 ? values[at] : 0;
    });
  return {
    firstLocalHour: from,
    exposureHours: pick(counts.exposureHours),
    counts: counts.counts.map(pick),
    ...(counts.areaExposure ? { areaExposure: counts.areaExposure.map(pick) } : {}),
  };
}

/** The state with effects that the model has not met, at their priors. */
function withNewEffects(
  model: ArrivalModel,
  wanted: readonly EffectPrior[],
): { effects: EffectPrior[]; state: LevelState } {
  const known = new Set(model.effects.map(({ key }) => key));
  const added = wanted.filter(({ key }) => !known.has(key));
  const oldSize = model.site.mean.length;
  const size = oldSize + added.length;
  const covariance = new Array<number>(size * size).fill(0);
  for (let i = 0; i < oldSize; i += 1) {
    for (let j = 0; j < oldSize; j += 1) covariance[i * size + j] = model.site.covariance[i * oldSize + j];
  }
  added.forEach(({ sd }, i) => {
    covariance[(oldSize + i) * (size + 1)] = sd ** 2;
  });
  const effects = [...model.effects, ...added];
  if (firstEffect + effects.length !== size) {
    throw new RangeError(`model holds ${model.effects.length} effects but a state of ${oldSize}`);
  }
  return { effects, state: { mean: [...model.site.mean, ...added.map(({ mean }) => mean)], covariance } };
}
