import { describe, expect, it } from 'vitest';
import { finiteBeds } from '../../../shared/forecasting/finite-beds.ts';
import { pmfExceedance, pmfMean, pmfQuantile, pmfVariance } from '../../../shared/stochastic/pmf.ts';
import reference from '../../reference/patients-over-time.json' with { type: 'json' };
import queues from '../../reference/queue-formulas.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

/** Constant rates run to equilibrium: doubling times until nothing moves any more. */
function atRest(rate: number, hazard: number, beds: number, tail: number): Float64Array {
  const utilisation = rate / (beds * hazard);
  const most = Math.ceil(beds + tail / -Math.log(utilisation));
  let start: number | Float64Array = Math.min(most, Math.round(rate / hazard));
  // Relaxation time of M/M/c is at most about 1 / (hazard · beds · (1 − √ρ)²) (Morse 1958).
  const relaxation = 1 / (hazard * beds * (1 - Math.sqrt(utilisation)) ** 2) + 1 / hazard;
  for (let round = 0; round < 4; round += 1) {
    const args = { ratePerHour: [rate], hazardPerHour: [hazard], beds: [beds], most };
    [start] = finiteBeds({ hours: [4 * relaxation], start, ...args });
  }
  return start as Float64Array;
}

describe('finiteBeds', () => {
  // Source: matrix exponential in SciPy, checked with R's expm, in patients-over-time.json.
  it.each(Object.entries(reference.finiteBeds))('agrees with the matrix exponential, case %s', (_, one) => {
    const laws = finiteBeds({
      hours: one.rates.map(() => 1),
      ratePerHour: one.rates,
      hazardPerHour: one.rates.map(() => one.mu),
      beds: one.c_by_hour,
      start: one.n0,
    });
    for (const [hour, expected] of Object.entries(one.at_hour)) {
      const law = laws[Number(hour) - 1];
      const beds = one.c_by_hour[Number(hour) - 1];
      expected.pmf_0_to_60.forEach((chance, n) => expectWithin(law[n], chance, 1e-8, `P(N = ${n}) at ${hour}`));
      expectWithin(pmfMean(law), expected.mean, 1e-8, `mean at ${hour}`);
      expectWithin(pmfVariance(law), expected.var, 1e-7, `variance at ${hour}`);
      expectWithin(pmfExceedance(law, beds), expected.P_N_gt_c, 1e-8, `P(N > c) at ${hour}`);
      expectWithin(pmfExceedance(law, beds - 1), expected.P_N_ge_c, 1e-8, `P(N ≥ c) at ${hour}`);
      for (const [p, n] of Object.entries(expected.quantiles)) expect(pmfQuantile(law, Number(p))).toBe(n);
    }
  });

  // Source: the M/M/c formulas (Erlang 1917) in mpmath and R, in queue-formulas.json.
  it('run to equilibrium gives the M/M/c laws (13 queues, utilisation 0.33 to 0.98)', () => {
    for (const one of queues.mmc) {
      const law = atRest(one.lambda, one.mu, one.c, 18);
      const label = `λ ${one.lambda}, μ ${one.mu}, c ${one.c}`;
      one.pmf_0_to_40.forEach((chance, n) => expectWithin(law[n] ?? 0, chance, 1e-6, `${label}: P(N = ${n})`));
      expectWithin(pmfExceedance(law, one.c - 1), one.P_wait, 1e-6, `${label}: chance of waiting`);
      expectRelative(pmfMean(law), one.L, 1e-6, `${label}: mean present`);
    }
  });

  it('run to equilibrium gives printed queue tables to half their last digit', () => {
    const cells = queues.publishedQueues.filter((cell) => cell.measure === 'meanWaiting');
    expect(cells.length).toBeGreaterThan(0);
    for (const cell of cells) {
      const law = atRest(cell.arrivalRate, cell.serviceRate, cell.servers, 40);
      const waiting = law.reduce((sum, chance, n) => sum + chance * Math.max(0, n - cell.servers), 0);
      expectWithin(
        waiting * cell.scale,
        cell.published,
        Math.max(cell.tolerance, 1e-9),
        `${cell.source} (${cell.how})`,
      );
    }
  });

  it('keeps all chance and is never negative, in calm and in overload', () => {
    const hours = new Float64Array(48).fill(1);
    for (const rate of [0, 4, 40]) {
      const laws = finiteBeds({
        hours,
        ratePerHour: hours.map(() => rate),
        hazardPerHour: hours.map(() => 0.25),
        beds: hours.map((_, k) => (k % 24 < 12 ? 20 : 12)),
        start: 12,
      });
      for (const law of laws) {
        expectWithin(
          law.reduce((sum, chance) => sum + chance, 0),
          1,
          1e-11,
          `sum at rate ${rate}`,
        );
        expect(Math.min(...law)).toBeGreaterThanOrEqual(0);
      }
    }
  });

  it('without a bed nobody leaves and with beds for all it is the exact need', () => {
    const [none] = finiteBeds({ hours: [2], ratePerHour: [0], hazardPerHour: [1], beds: [0], start: 3 });
    expect(none[3]).toBe(1);
    const { piecewise } = reference;
    const laws = finiteBeds({
      hours: piecewise.rates.map(() => 1),
      ratePerHour: piecewise.rates,
      hazardPerHour: piecewise.rates.map(() => piecewise.mu),
      beds: piecewise.rates.map(() => 200),
      start: piecewise.n0,
    });
    piecewise.pmf['12'].forEach((chance, n) => expectWithin(laws[11][n], chance, 1e-12, `P(N = ${n})`));
  });

  it('refuses bad input by name', () => {
    const good = { hours: [1], ratePerHour: [1], hazardPerHour: [1], beds: [2], start: 1 };
    expect(() => finiteBeds({ ...good, hours: [-1] })).toThrow(/hours\[0\]/);
    expect(() => finiteBeds({ ...good, ratePerHour: [NaN] })).toThrow(/ratePerHour\[0\]/);
    expect(() => finiteBeds({ ...good, hazardPerHour: [Infinity] })).toThrow(/hazardPerHour\[0\]/);
    expect(() => finiteBeds({ ...good, beds: [1.5] })).toThrow(/beds\[0\]/);
    expect(() => finiteBeds({ ...good, start: -1 })).toThrow(/start/);
    expect(() => finiteBeds({ ...good, most: 0 })).toThrow(/most/);
  });
});
