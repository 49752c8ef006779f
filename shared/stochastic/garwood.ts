import { checkCount, checkLevel, checkPositive } from './check.ts';
import { gammaQuantile } from './gamma.ts';

/**
 * Exact limits for a Poisson rate (Garwood 1936, Biometrika 28, 437): with N events in exposure E and α = 1 − level,
 * [χ²(α/2; 2N) / 2E, χ²(1 − α/2; 2N + 2) / 2E]. The true rate lies inside at least `level` of the time.
 * @param count events; @param exposure time at risk; @param level confidence, strictly between 0 and 1.
 * @returns [lower, upper] in events per unit of exposure; lower is 0 when count is 0.
 * @throws RangeError naming the bad argument.
 */
export function garwoodLimits(count: number, exposure: number, level: number): [lower: number, upper: number] {
  checkCount('count', count);
  checkPositive('exposure', exposure);
  checkLevel('level', level);
  const tail = (1 - level) / 2;
  const lower = count === 0 ? 0 : gammaQuantile(tail, count);
  return [lower / exposure, gammaQuantile(1 - tail, count + 1) / exposure];
}
