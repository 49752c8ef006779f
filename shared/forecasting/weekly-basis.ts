import { hoursOfWeek } from '../domain/hour-of-week.ts';

/**
 * The smooth part of a weekly profile, in four families of terms.
 * - `daily`: Fourier terms of whole cycles a day, the same shape every day, up to a sharp opening hour;
 * - `weekday`: one step for each day of the week, from midnight to midnight;
 * - `weekly`: one to three cycles a week, by which days differ without a step at midnight;
 * - `mixed`: side bands of the daily cycles, by which the shape itself differs between days.
 * Each coefficient has a normal prior whose variance falls with its frequency; the scale of a family is chosen by
 * marginal likelihood. Coarse (little history) keeps few daily terms and one weekly, and no mixed ones.
 */
export interface WeeklyBasis {
  size: number;
  /** hour × size, row-major; column 0 is the constant. */
  rows: Float64Array;
  family: ('level' | 'daily' | 'weekday' | 'weekly' | 'mixed')[];
  /** Prior variance of each coefficient at unit scale. */
  variance: number[];
}

interface Term {
  family: WeeklyBasis['family'][number];
  variance: number;
  value(hour: number): number;
}

function makeBasis(coarse: boolean): WeeklyBasis {
  const terms: Term[] = [{ family: 'level', variance: 1, value: () => 1 }];
  const addCycles = (family: Term['family'], cycles: number, variance: number): void => {
    // The middle of the hour, so that a profile and its mirror image are treated alike.
    const angle = (hour: number): number => (2 * Math.PI * cycles * (hour + 0.5)) / hoursOfWeek;
    terms.push({ family, variance, value: (hour) => Math.sin(angle(hour)) });
    // At twelve cycles a day the cosine is nought in the middle of every hour.
    if (cycles !== 84) terms.push({ family, variance, value: (hour) => Math.cos(angle(hour)) });
  };
  for (let j = 1; j <= (coarse ? 3 : 12); j += 1) addCycles('daily', 7 * j, 1 / j ** 3);
  for (let day = 0; day < 7; day += 1) {
    terms.push({ family: 'weekday', variance: 1, value: (hour) => (Math.floor(hour / 24) === day ? 1 : 0) });
  }
  for (let k = 1; k <= (coarse ? 1 : 3); k += 1) addCycles('weekly', k, 1);
  if (!coarse) {
    for (let j = 1; j <= 2; j += 1) {
      for (const side of [-3, -2, -1, 1, 2, 3]) addCycles('mixed', 7 * j + side, 1 / j ** 2);
    }
  }
  const size = terms.length;
  return {
    size,
    rows: Float64Array.from({ length: hoursOfWeek * size }, (_, i) => terms[i % size].value(Math.floor(i / size))),
    family: terms.map(({ family }) => family),
    variance: terms.map(({ variance }) => variance),
  };
}

const fine = makeBasis(false);
const coarseBasis = makeBasis(true);

/** The basis used for a profile: fine, or coarse below eight weeks of history. */
export function weeklyBasis(coarse: boolean): WeeklyBasis {
  return coarse ? coarseBasis : fine;
}
