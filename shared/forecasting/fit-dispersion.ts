import { gammaPoissonLogPmf } from '../stochastic/gamma-poisson.ts';

/**
 * Maximum-likelihood dispersion φ of gamma–Poisson counts whose means are known (variance m + φ m²), by golden-section
 * search on ln φ between e⁻¹⁰ and e; 0 where Poisson does better. Means of 0 are passed over.
 * @param tolerance of ln φ
 * Cost: about 15 passes over the counts.
 */
export function fitDispersion(means: ArrayLike<number>, observed: ArrayLike<number>, tolerance = 0.03): number {
  const loss = (phi: number): number => {
    let sum = 0;
    for (let i = 0; i < means.length; i += 1) if (means[i] > 0) sum -= gammaPoissonLogPmf(observed[i], means[i], phi);
    return sum;
  };
  const ratio = (Math.sqrt(5) - 1) / 2;
  let low = -10;
  let high = 1;
  let a = high - ratio * (high - low);
  let b = low + ratio * (high - low);
  let lossA = loss(Math.exp(a));
  let lossB = loss(Math.exp(b));
  while (high - low > tolerance) {
    if (lossA < lossB) {
      high = b;
      b = a;
      lossB = lossA;
      a = high - ratio * (high - low);
      lossA = loss(Math.exp(a));
    } else {
      low = a;
      a = b;
      lossA = lossB;
      b = low + ratio * (high - low);
      lossB = loss(Math.exp(b));
    }
  }
  const best = Math.exp((low + high) / 2);
  return loss(0) <= loss(best) ? 0 : best;
}
