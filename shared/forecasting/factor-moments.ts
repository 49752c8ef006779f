import { blockOf, type BlockCut } from './block-series.ts';

/**
 * Splits the variation beyond Poisson into what areas share and what each has of its own, by moments.
 *
 * With y_a ~ Poisson(m_a S A_a): Cov(y_a, y_b) = m_a m_b Var S, and Var(y_a) = m_a + m_a² (Var S + Var A_a). The shared
 * variance is Σ (y_a − m_a)(y_b − m_b) / Σ m_a m_b over all pairs of areas and blocks, an area's own what its variance
 * has beyond that; negative estimates count as none.
 * @param observed per area and hour; @param expected per area and hour, all that is known multiplied in
 */
export function factorMoments(
  observed: readonly Float64Array[],
  expected: readonly Float64Array[],
  firstLocalHour: number,
  cut: BlockCut,
): { shared: number; own: number[] } {
  const areas = observed.length;
  const hours = observed[0].length;
  let crossTop = 0;
  let crossBottom = 0;
  const ownTop = new Float64Array(areas);
  const ownBottom = new Float64Array(areas);
  const gap = new Float64Array(areas);
  const mean = new Float64Array(areas);
  const close = (): void => {
    let gapSum = 0;
    let meanSum = 0;
    for (let a = 0; a < areas; a += 1) {
      gapSum += gap[a];
      meanSum += mean[a];
      crossTop -= gap[a] * gap[a];
      crossBottom -= mean[a] * mean[a];
      ownTop[a] += gap[a] * gap[a] - mean[a];
      ownBottom[a] += mean[a] * mean[a];
    }
    crossTop += gapSum * gapSum;
    crossBottom += meanSum * meanSum;
    gap.fill(0);
    mean.fill(0);
  };
  let block = blockOf(firstLocalHour, cut);
  for (let i = 0; i < hours; i += 1) {
    const here = blockOf(firstLocalHour + i, cut);
    if (here !== block) {
      close();
      block = here;
    }
    for (let a = 0; a < areas; a += 1) {
      if (!(expected[a][i] > 0)) continue;
      gap[a] += observed[a][i] - expected[a][i];
      mean[a] += expected[a][i];
    }
  }
  close();
  const shared = crossBottom > 0 ? Math.max(0, crossTop / crossBottom) : 0;
  const own = Array.from(ownTop, (top, a) => (ownBottom[a] > 0 ? Math.max(0, top / ownBottom[a] - shared) : 0));
  return { shared, own };
}
