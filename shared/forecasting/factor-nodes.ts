import { normalNodes } from '../stochastic/quadrature.ts';

/** One value of a factor and its weight in a quadrature. */
export interface FactorNode {
  value: number;
  weight: number;
}

/**
 * Nodes for a lognormal factor of mean 1 by Gauss–Hermite quadrature, rescaled so that their own mean is exactly 1.
 * @param variance of the factor, 0 or more; 0 gives one node. @throws RangeError naming a variance that is not.
 */
export function lognormalNodes(variance: number, count: number): FactorNode[] {
  if (!(variance >= 0 && variance < Infinity)) throw new RangeError(`variance must be 0 or more, got ${variance}`);
  if (variance === 0) return [{ value: 1, weight: 1 }];
  const sd = Math.sqrt(Math.log1p(variance));
  const { nodes, weights } = normalNodes(count);
  const values = Array.from(nodes, (x, i) => ({ value: Math.exp(sd * x), weight: weights[i] }));
  const mean = values.reduce((sum, node) => sum + node.value * node.weight, 0);
  return values.map((node) => ({ value: node.value / mean, weight: node.weight }));
}
