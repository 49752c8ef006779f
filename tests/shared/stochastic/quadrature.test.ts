import { describe, expect, it } from 'vitest';
import { gammaNodes, normalNodes } from '../../../shared/stochastic/quadrature.ts';
import { gammaPoissonPmf } from '../../../shared/stochastic/gamma-poisson.ts';
import { poissonPmf } from '../../../shared/stochastic/poisson.ts';
import reference from '../../reference/distributions.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

describe('Gauss nodes', () => {
  it.each(reference.gammaNodes)('gamma law, φ $phi, $count nodes (SciPy, mpmath)', (row) => {
    const own = gammaNodes(row.phi, row.count);
    row.nodes.forEach((x, i) => expectRelative(own.nodes[i], x, 1e-10, `node ${i}`));
    row.weights.forEach((w, i) => expectWithin(own.weights[i], w, 1e-12, `weight ${i}`));
  });

  it.each(reference.normalNodes)('normal law, $count nodes (NumPy hermegauss)', (row) => {
    const own = normalNodes(row.count);
    row.nodes.forEach((x, i) => expectWithin(own.nodes[i], x, 1e-11, `node ${i}`));
    row.weights.forEach((w, i) => expectWithin(own.weights[i], w, 1e-12, `weight ${i}`));
  });

  it('integrate a gamma law’s moments exactly, up to degree 2n − 1', () => {
    // E W^k = Π (1 + i φ), i < k, for mean 1 and variance φ.
    for (const phi of [1e-12, 0.004, 0.3, 2]) {
      const { nodes, weights } = gammaNodes(phi, 5);
      let moment = 1;
      for (let k = 0; k <= 9; k += 1) {
        expectRelative(
          nodes.reduce((sum, x, i) => sum + weights[i] * x ** k, 0),
          moment,
          1e-11,
          `φ ${phi}, degree ${k}`,
        );
        moment *= 1 + k * phi;
      }
    }
  });

  it('mix Poisson laws into the gamma–Poisson law', () => {
    const { nodes, weights } = gammaNodes(0.02, 24);
    for (const n of [20, 30, 40, 60]) {
      const mixed = nodes.reduce((sum, w, i) => sum + weights[i] * poissonPmf(n, 35 * w), 0);
      expectWithin(mixed, gammaPoissonPmf(n, 35, 0.02), 1e-10, `n ${n}`);
    }
  });

  it('φ = 0 is the single node 1; bad input is refused by name', () => {
    expect(Array.from(gammaNodes(0, 7).nodes)).toEqual([1]);
    expect(Array.from(gammaNodes(0, 7).weights)).toEqual([1]);
    expect(() => gammaNodes(-1, 3)).toThrow(/phi/);
    expect(() => gammaNodes(1, 0)).toThrow(/count/);
    expect(() => normalNodes(1.5)).toThrow(/count/);
  });
});
