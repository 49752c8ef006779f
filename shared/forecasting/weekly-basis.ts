import { hoursOfWeek } from '../domain/hour-of-week.ts';

/**
 * The smooth part of a weekly profile: Fourier terms in the hour of week, in three families.
 * - `daily`: whole cycles a day, the same shape every day;
 * - `weekly`: one to three cycles a week, the difference between days;
 * - `mixed`: side bands of the daily cycles, by which the shape itself differs between days.
 * Each coefficient has a normal prior whose variance falls with its frequency; the scale of a family is chosen by
 * marginal likelihood. Coarse (little history) keeps few daily terms and one weekly, and no mixed ones.
 */
export interface WeeklyBasis {
  size: number;
  /** hour × size, row-major; column 0 is the constant. */
  rows: Float64Array;
  family: ('level' | 'daily' | 'weekly' | 'mixed')[];
  /** Prior variance of each coefficient at unit scale. */
  variance: number[];
}

function makeBasis(coarse: boolean): WeeklyBasis {
  const terms: { cycles: number; family: WeeklyBasis['family'][number]; variance: number }[] = [];
  for (let j = 1; j <= (coarse ? 3 : 6); j += 1) terms.push({ cycles: 7 * j, family: 'daily', variance: 1 / j ** 3 });
  for (let k = 1; k <= (coarse ? 1 : 3); k += 1) terms.push({ cycles: k, family: 'weekly', variance: 1 });
  if (!coarse) {
    for (let j = 1; j <= 2; j += 1) {
      for (const side of [-3, -2, -1, 1, 2, 3]) {
        terms.push({ cycles: 7 * j + side, family: 'mixed', variance: 1 / j ** 2 });
      }
    }
  }
  const size = 1 + 2 * terms.length;
  const rows = new Float64Array(hoursOfWeek * size);
  for (let hour = 0; hour < hoursOfWeek; hour += 1) {
    rows[hour * size] = 1;
    terms.forEach(({ cycles }, i) => {
      // The middle of the hour, so that a profile and its mirror image are treated alike.
      const angle = (2 * Math.PI * cycles * (hour + 0.5)) / hoursOfWeek;
      rows[hour * size + 1 + 2 * i] = Math.sin(angle);
      rows[hour * size + 2 + 2 * i] = Math.cos(angle);
    });
  }
  return {
    size,
    rows,
    family: ['level', ...terms.flatMap(({ family }) => [family, family])],
    variance: [100, ...terms.flatMap(({ variance }) => [variance, variance])],
  };
}

const fine = makeBasis(false);
const coarseBasis = makeBasis(true);

/** The basis used for a profile: fine, or coarse below eight weeks of history. */
export function weeklyBasis(coarse: boolean): WeeklyBasis {
  return coarse ? coarseBasis : fine;
}
