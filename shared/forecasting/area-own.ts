import type { EffectPrior, LevelState } from './arrival-model.ts';
import { gatherBlocks, type HourlyExpectation } from './block-series.ts';
import type { CalendarIndex } from './calendar-effect.ts';
import { effectSum, filterLevel, firstEffect, firstState, smoothLevel, type FilterResult } from './level-filter.ts';
import { minimise } from './minimise.ts';

/** How an area may differ from the site as the year goes and on holidays. */
export const ownEffectPriors: EffectPrior[] = [
  { key: 'season sin 1', mean: 0, sd: 0.05 },
  { key: 'season cos 1', mean: 0, sd: 0.05 },
  { key: 'holiday', mean: 0, sd: 0.1 },
];

export interface AreaOwn {
  state: LevelState;
  effects: EffectPrior[];
  levelVariancePerDay: number;
  /** Smoothed factor of each day beside the site's. */
  dayFactor: Float64Array;
}

const day = { hours: 24, cut: 0 };
const still = { factorCorrelation: 0, spellVariance: 0, spellCorrelationPerDay: 0 };

/**
 * An area's own level, season and holiday effect beside the site's, from its share of each day's arrivals.
 * Given the site's count Y of a day the area's is binomial about Y · share, so the site's ups and downs cancel out. The
 * speed of the share's drift is chosen by the score of each day given those before it. Cost: about 40 passes over the days.
 */
export function fitAreaOwn(
  hourly: HourlyExpectation,
  counts: Float64Array,
  area: number,
  index: CalendarIndex,
  known?: { levelVariancePerDay: number },
): AreaOwn {
  const { series, informationScale } = shareSeries(hourly, counts, area, index);
  const run = (levelVariancePerDay: number, factorVariance: number): FilterResult =>
    filterLevel(
      series,
      { ...still, levelVariancePerDay, factorVariance },
      firstState(ownEffectPriors, factorVariance, 0),
      { informationScale },
    );
  const start = [Math.log(known?.levelVariancePerDay ?? 1e-5), Math.log(1e-3)];
  const at = (x: readonly number[]): [number, number] => [
    known?.levelVariancePerDay ?? Math.exp(Math.min(-4, Math.max(-18, x[0]))),
    Math.exp(Math.min(0, Math.max(-14, x[1]))),
  ];
  const objective = (x: readonly number[]): number =>
    -run(...at(x)).logProbability + 0.5 * (((x[0] - start[0]) / 1.5) ** 2 + ((x[1] - start[1]) / 1.5) ** 2);
  const [drift, noise] = at(minimise(objective, start, [1.5, 1.5], 40).x);
  const { state } = run(drift, noise);
  const effects = state.mean.slice(firstEffect);
  const level = smoothLevel(
    series,
    { ...still, levelVariancePerDay: drift, factorVariance: noise },
    effects,
    informationScale,
  );
  const dayFactor = level.map((value, k) => Math.exp(value + effectSum(series, k, effects)));
  return { state, effects: ownEffectPriors, levelVariancePerDay: drift, dayFactor };
}

/** The area's days, expected given the site's count, and the share of a count's information that is left (1 − share). */
export function shareSeries(hourly: HourlyExpectation, counts: Float64Array, area: number, index: CalendarIndex) {
  const keys = ownEffectPriors.map(({ key }) => key);
  const { firstLocalHour } = hourly;
  const series = gatherBlocks(
    { firstLocalHour, observed: counts, expected: hourly.areaExpected[area] },
    day,
    index,
    keys,
  );
  const site = gatherBlocks(hourly, day, index, []);
  const informationScale = new Float64Array(series.expected.length);
  const expected = series.expected.map((own, k) => {
    const share = site.expected[k] > 0 ? own / site.expected[k] : 0;
    informationScale[k] = Math.max(1 - share, 0.01);
    // A day on which nobody else was open says nothing of the share.
    return share > 0.999 ? 0 : share * site.observed[k];
  });
  return { series: { ...series, expected }, informationScale };
}

/** The belief about an area that is the whole site. */
export function noOwn(): AreaOwn {
  return {
    state: firstState([], 0, 0, 0),
    effects: [],
    levelVariancePerDay: 0,
    dayFactor: new Float64Array(0),
  };
}
