import { checkNonNegative, checkPositiveCount } from './check.ts';

/** Nodes ascending, and weights that sum to 1: E f(X) ≈ Σ weights[i] f(nodes[i]). */
export interface Quadrature {
  nodes: Float64Array;
  weights: Float64Array;
}

/**
 * Eigenvalues of a symmetric tridiagonal matrix and the squared first components of its unit eigenvectors, by implicit
 * QL steps with Wilkinson's shift: the algorithm of Golub & Welsch (1969), Mathematics of Computation 23, 221.
 */
function golubWelsch(diagonal: Float64Array, beside: Float64Array): Quadrature {
  const n = diagonal.length;
  const d = diagonal;
  const e = new Float64Array(n);
  e.set(beside.subarray(0, n - 1));
  const first = new Float64Array(n);
  first[0] = 1;
  for (let l = 0; l < n; l += 1) {
    for (let sweep = 0; ; sweep += 1) {
      let m = l;
      while (m < n - 1 && Math.abs(e[m]) > Number.EPSILON * (Math.abs(d[m]) + Math.abs(d[m + 1]))) m += 1;
      if (m === l) break;
      if (sweep === 60) throw new RangeError('quadrature did not converge');
      let g = (d[l + 1] - d[l]) / (2 * e[l]);
      let r = Math.hypot(g, 1);
      g = d[m] - d[l] + e[l] / (g + (g >= 0 ? r : -r));
      let s = 1;
      let c = 1;
      let p = 0;
      let i = m - 1;
      for (; i >= l; i -= 1) {
        const f = s * e[i];
        const b = c * e[i];
        r = Math.hypot(f, g);
        e[i + 1] = r;
        if (r === 0) {
          d[i + 1] -= p;
          e[m] = 0;
          break;
        }
        s = f / r;
        c = g / r;
        g = d[i + 1] - p;
        r = (d[i] - g) * s + 2 * c * b;
        p = s * r;
        d[i + 1] = g + p;
        g = c * r - b;
        const next = first[i + 1];
        first[i + 1] = s * first[i] + c * next;
        first[i] = c * first[i] - s * next;
      }
      if (i >= l) continue;
      d[l] -= p;
      e[l] = g;
      e[m] = 0;
    }
  }
  const order = Array.from(d.keys()).sort((a, b) => d[a] - d[b]);
  return {
    nodes: Float64Array.from(order, (i) => d[i]),
    weights: Float64Array.from(order, (i) => first[i] * first[i]),
  };
}

/**
 * Gauss nodes for a standard normal variable (Gauss–Hermite): exact for polynomials up to degree 2 · count − 1.
 * @throws RangeError unless count is a whole number, 1 or more. Cost: O(count²).
 */
export function normalNodes(count: number): Quadrature {
  checkPositiveCount('count', count);
  return golubWelsch(
    new Float64Array(count),
    Float64Array.from({ length: count }, (_, i) => Math.sqrt(i + 1)),
  );
}

/**
 * Gauss nodes for a gamma variable of mean 1 and variance φ (generalised Gauss–Laguerre): exact for polynomials up to
 * degree 2 · count − 1. Worked in units of √φ round the mean, where the matrix tends to Gauss–Hermite's as φ → 0 and
 * nothing cancels; φ = 0 gives the single node 1. @throws RangeError on a bad φ or count. Cost: O(count²).
 */
export function gammaNodes(phi: number, count: number): Quadrature {
  checkNonNegative('phi', phi);
  checkPositiveCount('count', count);
  if (phi === 0) return { nodes: Float64Array.of(1), weights: Float64Array.of(1) };
  const sd = Math.sqrt(phi);
  const { nodes, weights } = golubWelsch(
    Float64Array.from({ length: count }, (_, i) => 2 * i * sd),
    Float64Array.from({ length: count }, (_, i) => Math.sqrt((i + 1) * (1 + i * phi))),
  );
  // A node cannot be negative; rounding can put the lowest one there when φ is large.
  return { nodes: nodes.map((z) => Math.max(0, 1 + sd * z)), weights };
}
