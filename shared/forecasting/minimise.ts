/**
 * Nelder & Mead (1965) simplex search for a minimum, without derivatives.
 * @param start first point; @param step length of the first simplex in each direction
 * @returns the best point and its value after about `evaluations` calls, or when the simplex differs by less
 *   than 0.02 (log scores are minimised here; such a difference means nothing). Values that are not finite count as +Infinity.
 */
export function minimise(
  f: (x: readonly number[]) => number,
  start: readonly number[],
  step: readonly number[],
  evaluations: number,
): { x: number[]; value: number } {
  const n = start.length;
  let calls = 0;
  const at = (x: number[]): { x: number[]; value: number } => {
    calls += 1;
    const value = f(x);
    return { x, value: Number.isFinite(value) ? value : Infinity };
  };
  const simplex = [at([...start])];
  for (let i = 0; i < n; i += 1) simplex.push(at(start.map((v, j) => (i === j ? v + step[j] : v))));
  while (calls < evaluations) {
    simplex.sort((a, b) => a.value - b.value);
    const worst = simplex[n];
    if (worst.value - simplex[0].value < 0.02) break;
    const centre = start.map((_, j) => simplex.slice(0, n).reduce((sum, point) => sum + point.x[j], 0) / n);
    const towards = (share: number) => at(centre.map((v, j) => v + share * (worst.x[j] - v)));
    const reflected = towards(-1);
    if (reflected.value < simplex[0].value) {
      const expanded = towards(-2);
      simplex[n] = expanded.value < reflected.value ? expanded : reflected;
    } else if (reflected.value < simplex[n - 1].value) {
      simplex[n] = reflected;
    } else {
      const contracted = towards(reflected.value < worst.value ? -0.5 : 0.5);
      if (contracted.value < Math.min(worst.value, reflected.value)) simplex[n] = contracted;
      else for (let i = 1; i <= n; i += 1) simplex[i] = at(simplex[i].x.map((v, j) => (v + simplex[0].x[j]) / 2));
    }
  }
  simplex.sort((a, b) => a.value - b.value);
  return simplex[0];
}
