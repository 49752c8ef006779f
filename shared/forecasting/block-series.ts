import type { FactorStructure, HourlyCounts } from './arrival-model.ts';
import { effectsOfDay, profileHour, type CalendarIndex } from './calendar-effect.ts';

/** How a structure cuts time: blocks of `hours`, the first of a day beginning at `cut` o'clock. */
export interface BlockCut {
  hours: number;
  cut: number;
}

export const blockCuts: Record<FactorStructure, BlockCut> = {
  none: { hours: 24, cut: 0 },
  'gamma by calendar day': { hours: 24, cut: 0 },
  'by day cut at 04:00, AR(1)': { hours: 24, cut: 4 },
  'log-AR(1) on 6 h blocks': { hours: 6, cut: 4 },
  'log-AR(1) on 4 h blocks': { hours: 4, cut: 0 },
};

/** Whether neighbouring blocks are correlated in this structure. */
export function isAutoregressive(structure: FactorStructure): boolean {
  return structure.includes('AR(1)');
}

/** The block that a local hour belongs to; blocks are numbered from 1970-01-01. */
export function blockOf(localHour: number, { hours, cut }: BlockCut): number {
  return Math.floor((localHour - cut) / hours);
}

/** Counts and expectations by block. */
export interface BlockSeries {
  /** Number of the first block. */
  first: number;
  daysPerBlock: number;
  observed: Float64Array;
  /** Expected at level 1 with every effect at 0. */
  expected: Float64Array;
  /** Effects that act on each block, as index into the effect keys and weight. */
  effects: { index: number[]; value: number[] }[];
  /** Log probability of the hours' counts given the block's (multinomial), summed over blocks. */
  withinLogProbability: number;
}

/** A profile per area and the site's counts, as one table of expected and observed by hour. */
export interface HourlyExpectation {
  firstLocalHour: number;
  /** Summed over areas. */
  observed: Float64Array;
  expected: Float64Array;
  /** Per area. */
  areaExpected: Float64Array[];
}

/** Expected arrivals of every hour at level 1, from the profiles, the real exposure and the shape that holidays take. */
export function expectHourly(
  counts: HourlyCounts,
  ratePerHour: readonly (readonly number[])[],
  index: CalendarIndex,
): HourlyExpectation {
  const length = counts.exposureHours.length;
  const observed = new Float64Array(length);
  const expected = new Float64Array(length);
  const hours = new Int32Array(length);
  for (let i = 0; i < length; i += 1) hours[i] = profileHour(index, counts.firstLocalHour + i);
  const areaExpected = counts.counts.map((own, area) => {
    const exposure = counts.areaExposure?.[area] ?? counts.exposureHours;
    const rates = ratePerHour[area];
    const out = new Float64Array(length);
    for (let i = 0; i < length; i += 1) {
      out[i] = rates[hours[i]] * exposure[i];
      expected[i] += out[i];
      observed[i] += own[i];
    }
    return out;
  });
  return { firstLocalHour: counts.firstLocalHour, observed, expected, areaExpected };
}

/**
 * Gathers hours into blocks.
 * @param keys effect keys, in the order of the state's effects; effects not among them are left out.
 * Cost: linear in hours.
 */
export function gatherBlocks(
  hourly: { firstLocalHour: number; observed: Float64Array; expected: Float64Array },
  cut: BlockCut,
  index: CalendarIndex,
  keys: readonly string[],
): BlockSeries {
  const first = blockOf(hourly.firstLocalHour, cut);
  const count = blockOf(hourly.firstLocalHour + hourly.expected.length - 1, cut) - first + 1;
  const observed = new Float64Array(count);
  const expected = new Float64Array(count);
  const place = new Map(keys.map((key, i) => [key, i]));
  const effects: BlockSeries['effects'] = Array.from({ length: count }, () => ({ index: [], value: [] }));
  let within = 0;
  let day = NaN;
  let dayEffects: { at: number; value: number }[] = [];
  for (let i = 0; i < hourly.expected.length; i += 1) {
    const localHour = hourly.firstLocalHour + i;
    const block = blockOf(localHour, cut) - first;
    const expectedHere = hourly.expected[i];
    const observedHere = hourly.observed[i];
    observed[block] += observedHere;
    expected[block] += expectedHere;
    if (expectedHere > 0) within += observedHere * Math.log(expectedHere) - logFactorial(observedHere);
    if (Math.floor(localHour / 24) !== day) {
      day = Math.floor(localHour / 24);
      dayEffects = effectsOfDay(index, day).flatMap(([key, value]) => {
        const at = place.get(key);
        return at === undefined ? [] : [{ at, value }];
      });
    }
    const into = effects[block];
    for (const { at, value } of dayEffects) {
      const known = into.index.indexOf(at);
      if (known < 0) {
        into.index.push(at);
        into.value.push(value * expectedHere);
      } else into.value[known] += value * expectedHere;
    }
  }
  for (let block = 0; block < count; block += 1) {
    const { value } = effects[block];
    for (let j = 0; j < value.length; j += 1) value[j] = expected[block] > 0 ? value[j] / expected[block] : 0;
    if (expected[block] > 0) within += logFactorial(observed[block]) - observed[block] * Math.log(expected[block]);
  }
  return { first, daysPerBlock: cut.hours / 24, observed, expected, effects, withinLogProbability: within };
}

const factorials: number[] = [0];
function logFactorial(n: number): number {
  for (let i = factorials.length; i <= n; i += 1) factorials.push(factorials[i - 1] + Math.log(i));
  return factorials[n];
}
