import { describe, expect, it } from 'vitest';
import { garwoodLimits } from '../../../shared/stochastic/garwood.ts';
import { drawPoisson, poissonCdf, poissonExceedance, poissonPmf } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import reference from '../../reference/continuous-quantiles.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

describe('garwoodLimits', () => {
  it('agree with SciPy and R (52 counts × 4 levels)', () => {
    for (const row of reference.garwood) {
      for (const level of ['0.80', '0.90', '0.95', '0.99'] as const) {
        const [lower, upper] = garwoodLimits(row.k, 1, Number(level));
        expectRelative(lower, row[level][0], 1e-10, `count ${row.k}, ${level}, lower`);
        expectRelative(upper, row[level][1], 1e-10, `count ${row.k}, ${level}, upper`);
      }
    }
  });

  it('scale with exposure (arrivals at an intensive care unit by hour, SciPy and R)', () => {
    for (const { count, rate_ci_count_scale } of reference.garwoodByHour) {
      const [lower, upper] = garwoodLimits(count, 12.5, 0.95);
      expectRelative(lower * 12.5, rate_ci_count_scale[0], 1e-10, `${count} lower`);
      expectRelative(upper * 12.5, rate_ci_count_scale[1], 1e-10, `${count} upper`);
    }
  });

  it.each(reference.publishedGarwood)(
    'printed $side limit $published, $count events at $level ($source, $how)',
    (cell) => {
      const [lower, upper] = garwoodLimits(cell.count, 1, cell.level);
      expectWithin(cell.side === 'lower' ? lower : upper, cell.published, cell.tolerance, 'half the last digit');
    },
  );

  it('are where the count’s own tail holds α/2 (their definition, Garwood 1936)', () => {
    for (const count of [1, 4, 30, 500]) {
      const [lower, upper] = garwoodLimits(count, 1, 0.9);
      expectRelative(poissonExceedance(count - 1, lower), 0.05, 1e-9, `lower, ${count}`);
      expectRelative(poissonCdf(count, upper), 0.05, 1e-9, `upper, ${count}`);
    }
  });

  it.each([0.4, 3, 11.5, 60])(
    'cover a true mean of %d as often as their exact coverage says, never less than 95 %%',
    (mean) => {
      const covers = (count: number) => {
        const [lower, upper] = garwoodLimits(count, 1, 0.95);
        return lower <= mean && mean <= upper;
      };
      let exact = 0;
      for (let count = 0; count < 200; count += 1) if (covers(count)) exact += poissonPmf(count, mean);
      expect(exact).toBeGreaterThanOrEqual(0.95);
      const stream = makeStream(91, Math.round(mean * 10));
      const runs = 5000;
      let covered = 0;
      for (let i = 0; i < runs; i += 1) if (covers(drawPoisson(stream, mean))) covered += 1;
      expectWithin(covered / runs, exact, 4 * Math.sqrt((exact * (1 - exact)) / runs), 'simulated coverage');
    },
  );

  it('refuses bad input by name', () => {
    expect(() => garwoodLimits(-1, 1, 0.95)).toThrow(/count/);
    expect(() => garwoodLimits(1.5, 1, 0.95)).toThrow(/count/);
    expect(() => garwoodLimits(1, 0, 0.95)).toThrow(/exposure/);
    expect(() => garwoodLimits(1, NaN, 0.95)).toThrow(/exposure/);
    for (const level of [0, 1, NaN]) expect(() => garwoodLimits(1, 1, level)).toThrow(/level/);
  });
});
