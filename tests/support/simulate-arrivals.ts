import type { ArrivalModel, HourlyCounts } from '../../shared/forecasting/arrival-model.ts';
import { hourOfWeek } from '../../shared/domain/hour-of-week.ts';
import { drawGamma } from '../../shared/stochastic/gamma.ts';
import { drawNormal } from '../../shared/stochastic/normal.ts';
import { drawPoisson } from '../../shared/stochastic/poisson.ts';
import { makeStream } from '../../shared/stochastic/random.ts';

export interface SimulatedArrivals {
  counts: HourlyCounts;
  /** True rate per hour of each area and hour of week, at factor 1 and the level of the end. */
  rates: number[][];
}

/** 2019-01-07, a Monday, in local hours. */
export const firstMonday = 17_903 * 24;

/**
 * A log whose truth is known: a wavy week per area, a gamma day factor shared by all and one of each area's own, and a
 * level that walks, all from one seed.
 */
export function simulateArrivals(options: {
  seed: number;
  weeks: number;
  perDay: number[];
  phi?: number;
  ownPhi?: number;
  levelSdPerDay?: number;
  exposure?: (localHour: number) => number;
}): SimulatedArrivals {
  const { seed, weeks, perDay, phi = 0, ownPhi = 0, levelSdPerDay = 0, exposure = () => 1 } = options;
  const stream = makeStream(seed, 23);
  const hours = weeks * 168;
  const shape = perDay.map((_, a) => {
    const phase = 8 + 3 * a;
    return Array.from({ length: 168 }, (__, h) => {
      const daily = 1 + 0.6 * Math.sin((2 * Math.PI * ((h % 24) - phase)) / 24);
      return daily * (h < 24 ? 1.12 : h >= 120 ? 0.9 : 1);
    });
  });
  const base = perDay.map((total, a) => shape[a].map((value) => (value * total) / 24));
  const counts = perDay.map(() => new Float64Array(hours));
  const exposureHours = new Float64Array(hours);
  let level = 0;
  for (let d = 0; d < weeks * 7; d += 1) {
    level += levelSdPerDay * drawNormal(stream);
    const shared = phi > 0 ? phi * drawGamma(stream, 1 / phi) : 1;
    const own = perDay.map(() => (ownPhi > 0 ? ownPhi * drawGamma(stream, 1 / ownPhi) : 1));
    for (let h = 0; h < 24; h += 1) {
      const i = d * 24 + h;
      exposureHours[i] = exposure(firstMonday + i);
      for (let a = 0; a < perDay.length; a += 1) {
        const rate = base[a][hourOfWeek(firstMonday + i)] * Math.exp(level) * shared * own[a];
        counts[a][i] = drawPoisson(stream, rate * exposureHours[i]);
      }
    }
  }
  return {
    counts: { firstLocalHour: firstMonday, exposureHours, counts },
    rates: base.map((rates) => rates.map((rate) => rate * Math.exp(level))),
  };
}

/** Every number of a model, to be looked through. */
export function numbersOf(model: ArrivalModel): number[] {
  const found: number[] = [];
  const walk = (value: unknown): void => {
    if (typeof value === 'number') found.push(value);
    else if (Array.isArray(value)) value.forEach(walk);
    else if (typeof value === 'object' && value !== null) Object.values(value).forEach(walk);
  };
  walk(model);
  return found;
}
