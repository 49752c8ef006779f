import { describe, expect, it } from 'vitest';
import { fitCensoredExponential } from '../../../shared/stochastic/censored-exponential.ts';
import reference from '../../reference/censored-exponential.json' with { type: 'json' };
import { expectRelative } from '../../support/closeness.ts';

describe('fitCensoredExponential', () => {
  it.each(Object.entries(reference.fits))('agrees with SciPy and R on %s', (_, fit) => {
    const own = fitCensoredExponential(fit.events, fit.exposure, 0.95);
    expectRelative(own.rate, fit.rate, 1e-12, 'rate');
    expectRelative(own.mean, fit.mean, 1e-12, 'mean');
    expectRelative(own.lower, fit.ci95_rate_garwood[0], 1e-9, 'lower');
    expectRelative(own.upper, fit.ci95_rate_garwood[1], 1e-9, 'upper');
    expectRelative(own.lower, fit.ci95_rate_chi2_typeII[0], 1e-9, 'lower, type II');
    expectRelative(own.upperTypeTwo, fit.ci95_rate_chi2_typeII[1], 1e-9, 'upper, type II');
    expectRelative(own.logLikelihood, fit.loglik, 1e-10, 'log likelihood');
  });

  it('gives remission’s printed rate from the times themselves (Gehan 1965; 9 relapses in 359 weeks)', () => {
    const times = reference.gehan6MP;
    const events = times.filter(([, event]) => event === 1).length;
    const atRisk = times.reduce((sum, [time]) => sum + time, 0);
    expect([events, atRisk]).toEqual([9, 359]);
    expectRelative(fitCensoredExponential(events, atRisk, 0.95).rate, 9 / 359, 1e-15, 'rate');
  });

  it('without events gives rate 0 and an upper limit of −ln(α/2) / T', () => {
    const fit = fitCensoredExponential(0, 10, 0.95);
    expect([fit.rate, fit.lower, fit.mean, fit.logLikelihood]).toEqual([0, 0, Infinity, 0]);
    expectRelative(fit.upper, -Math.log(0.025) / 10, 1e-12, 'upper');
  });

  it('refuses bad input by name', () => {
    expect(() => fitCensoredExponential(-1, 1, 0.95)).toThrow(/events/);
    expect(() => fitCensoredExponential(1, 0, 0.95)).toThrow(/timeAtRisk/);
    expect(() => fitCensoredExponential(1, 1, 1)).toThrow(/level/);
  });
});
