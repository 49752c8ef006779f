import { fitArrivals } from '../../shared/forecasting/fit-arrivals.ts';
import { weeklyRates } from '../../shared/forecasting/weekly-rates.ts';
import { simulateArrivals } from '../support/simulate-arrivals.ts';
import type { Soak } from './soak.ts';

const logs = 1000;
const phi = 0.01;

/** A thousand logs of 40 weeks drawn from known rates: do the model's intervals hold the truth, is φ unbiased? (The truth is the simulation's own.) */
export const recoverArrivals: Soak = {
  name: 'recover-arrivals',
  run(print) {
    let inside = 0;
    const found: number[] = [];
    for (let log = 0; log < logs; log += 1) {
      const { counts, rates } = simulateArrivals({
        seed: 10_000 + log,
        weeks: 40,
        perDay: [100],
        phi,
        levelSdPerDay: 0.003,
      });
      const model = fitArrivals({ counts, calendar: [] });
      const { low, high } = weeklyRates(model, 0);
      rates[0].forEach((rate, hour) => (inside += rate >= low[hour] && rate <= high[hour] ? 1 : 0));
      // The posterior mean of the variance, as it is drawn: log-normal about its mode. A busy or quiet spell is part of it.
      const variance = model.factorVariance * Math.exp(2 * model.factorLogSdError ** 2) + model.spellVariance;
      found.push(Math.expm1(variance));
      if ((log + 1) % 100 === 0) print(`${String(log + 1)} logs`);
    }
    const share = inside / (logs * 168);
    const mean = found.reduce((sum, value) => sum + value, 0) / logs;
    const se = Math.sqrt(found.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (logs - 1) / logs);
    print(`95 % intervals of the 168 rates hold the truth in ${(100 * share).toFixed(2)} % of cells`);
    print(`φ: mean ${mean.toFixed(5)} for ${String(phi)}, standard error ${se.toFixed(5)}`);
    if (share < 0.92 || share > 0.98) throw new Error('coverage is not within 92–98 %');
    // Over so many logs two standard errors are about 1 % of φ; what the moving level takes from it is allowed 2 %.
    if (Math.abs(mean - phi) > 2 * se + 0.02 * phi) {
      throw new Error('φ is biased by more than two standard errors and 2 %');
    }
  },
};
