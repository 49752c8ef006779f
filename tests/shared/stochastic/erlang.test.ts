import { describe, expect, it } from 'vitest';
import { erlangB, erlangC, mmcMeasures, mmcStationary, serversForDelay } from '../../../shared/stochastic/erlang.ts';
import { pmfQuantile } from '../../../shared/stochastic/pmf.ts';
import reference from '../../reference/queue-formulas.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

// Source of values: SciPy / mpmath, checked with R, in queue-formulas.json; printed cells carry their own source.
describe('Erlang B and C', () => {
  it('agree with SciPy and R (160 cells, and 8 of 500 to several thousand servers)', () => {
    for (const row of [...reference.erlang, ...reference.erlangExtreme]) {
      const label = `c ${row.c}, a ${row.a}`;
      expectRelative(erlangB(row.c, row.a), row.B, 1e-11, `B, ${label}`);
      // Without a value where the load is too much for the servers to settle.
      expectRelative(erlangC(row.c, row.a), row.C ?? 1, 1e-11, `C, ${label}`);
    }
  });

  it('give back the blocking of 153 computed loads', () => {
    for (const row of reference.offeredForBlocking)
      expectRelative(erlangB(row.N, row.a), row.B, 1e-9, JSON.stringify(row));
  });

  it('printed traffic tables hold to half their last digit (91 cells)', () => {
    for (const cell of reference.publishedTraffic) {
      // B rises with the load, so the printed load is right when the blocking lies between those of its rounding bounds.
      const label = `${cell.servers} servers, ${cell.blocking} (${cell.source}, ${cell.how})`;
      expect(erlangB(cell.servers, cell.published - cell.tolerance), label).toBeLessThanOrEqual(cell.blocking);
      expect(erlangB(cell.servers, cell.published + cell.tolerance), label).toBeGreaterThanOrEqual(cell.blocking);
    }
  });

  it('servers needed for a chance of waiting (60 cells)', () => {
    for (const row of reference.serversNeeded) {
      expect(serversForDelay(row.a, row.target), JSON.stringify(row)).toBe(row.min_c_ErlangC_le_target);
    }
  });

  it('edge cases: no load never waits, too much load always waits', () => {
    expect(erlangB(0, 3)).toBe(1);
    expect(erlangB(4, 0)).toBe(0);
    expect(erlangC(4, 0)).toBe(0);
    expect(erlangC(4, 4)).toBe(1);
    expect(erlangC(4, 9)).toBe(1);
  });

  it('refuses bad input by name', () => {
    expect(() => erlangB(1.5, 1)).toThrow(/servers/);
    expect(() => erlangB(1, -1)).toThrow(/offered/);
    expect(() => erlangC(0, 0)).toThrow(/servers/);
    expect(() => erlangC(2.5, 3)).toThrow(/servers/);
    expect(() => erlangC(2, NaN)).toThrow(/offered/);
    expect(() => serversForDelay(1, 0)).toThrow(/risk/);
    expect(() => mmcStationary(3, 1, 3, 5)).toThrow(/arrivalRate/);
    expect(() => mmcStationary(1, 0, 3, 5)).toThrow(/serviceRate/);
    expect(() => mmcMeasures(1, 1, 2).waitExceedance(-1)).toThrow(/t must/);
  });
});

describe('M/M/c at rest', () => {
  it.each(reference.mmc)('λ $lambda, μ $mu, c $c (SciPy, R)', (row) => {
    const own = mmcMeasures(row.lambda, row.mu, row.c);
    expectRelative(own.idle, row.p0, 1e-10, 'p0');
    expectRelative(own.delay, row.P_wait, 1e-10, 'delay');
    expectRelative(own.meanWaiting, row.Lq, 1e-10, 'Lq');
    expectRelative(own.meanPresent, row.L, 1e-10, 'L');
    expectRelative(own.meanWait, row.Wq, 1e-10, 'Wq');
    expectRelative(own.meanTime, row.W, 1e-10, 'W');
    expectRelative(own.utilisation, row.rho, 1e-12, 'rho');
    expectRelative(own.waitExceedance(1 / row.mu), row.P_Wq_gt_mean_service, 1e-10, 'P(Wq > 1/μ)');
    const pmf = mmcStationary(row.lambda, row.mu, row.c, 40);
    row.pmf_0_to_40.forEach((p, n) => expectRelative(pmf[n], p, 1e-9, `P(N = ${n})`));
    const long = mmcStationary(row.lambda, row.mu, row.c, 5000);
    for (const [p, n] of Object.entries(row.quantiles)) expect(pmfQuantile(long, Number(p)), `quantile ${p}`).toBe(n);
  });

  it.each(reference.publishedQueues)('printed $measure = $published ($source, $how)', (cell) => {
    const own = mmcMeasures(cell.arrivalRate, cell.serviceRate, cell.servers);
    const value = own[cell.measure as 'meanWaiting' | 'meanPresent' | 'meanWait' | 'meanTime' | 'idle'] * cell.scale;
    expectWithin(value, cell.published, cell.tolerance, 'half the last digit');
  });

  it('sums to 1 and balances at 500 servers (balance: λ P(n) = min(n + 1, c) μ P(n + 1))', () => {
    const pmf = mmcStationary(480, 1, 500, 3000);
    expectWithin(
      pmf.reduce((sum, p) => sum + p, 0),
      1,
      1e-10,
      'sum',
    );
    for (const n of [300, 480, 499, 500, 700]) {
      expectRelative(480 * pmf[n], Math.min(n + 1, 500) * pmf[n + 1], 1e-12, `n ${n}`);
    }
  });
});
