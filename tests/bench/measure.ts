/** One figure of the bench. */
export interface Figure {
  name: string;
  value: number;
  unit: string;
  better: 'lower' | 'higher';
  /** The same work done with what a user would pick instead, where that is at hand. */
  compare: { name: string; value: number } | null;
  /** How many times better than the comparison; null without one. */
  ratio: number | null;
  runs: number;
  /** Least and greatest of the runs. */
  spread: [number, number];
  /** What an issue asks for, in the figure's unit; printed as met or short. */
  goal?: number;
}

export interface Bench {
  name: string;
  run: () => Promise<Figure[]> | Figure[];
}

/** Median of several runs after a warm-up. `work` answers what it measured, in the figure's unit. */
export async function measure(
  figure: Pick<Figure, 'name' | 'unit' | 'better'> & { goal?: number; compare?: Figure['compare'] },
  work: () => number | Promise<number>,
  runs = 5,
): Promise<Figure> {
  await work();
  const values: number[] = [];
  for (let run = 0; run < runs; run += 1) values.push(await work());
  values.sort((a, b) => a - b);
  const middle = Math.floor(runs / 2);
  const value = runs % 2 === 1 ? values[middle] : (values[middle - 1] + values[middle]) / 2;
  const compare = figure.compare ?? null;
  const ratio = compare === null ? null : figure.better === 'lower' ? compare.value / value : value / compare.value;
  return { ...figure, value, compare, ratio, runs, spread: [values[0], values[runs - 1]] };
}

/** A figure from values measured already: the given quantile of them (nearest rank). */
export function summarise(
  figure: Pick<Figure, 'name' | 'unit' | 'better'> & { goal?: number },
  values: readonly number[],
  quantile: number,
): Figure {
  const sorted = [...values].sort((a, b) => a - b);
  const value = sorted[Math.max(0, Math.ceil(quantile * sorted.length) - 1)];
  return {
    ...figure,
    value,
    compare: null,
    ratio: null,
    runs: sorted.length,
    spread: [sorted[0], sorted[sorted.length - 1]],
  };
}

/** Milliseconds that some work takes. */
export async function milliseconds(work: () => unknown): Promise<number> {
  const startedAt = performance.now();
  await work();
  return performance.now() - startedAt;
}
