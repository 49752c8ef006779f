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
  /** What is asked for, in the figure's unit; printed as met or short. */
  goal?: number;
  /** The least ratio that is asked for, where there is a comparison. */
  goalRatio?: number;
}

export interface Bench {
  name: string;
  /** Takes so long that it is run only where it is asked for by its name. */
  onlyByName?: true;
  run: () => Promise<Figure[]> | Figure[];
}

type Named = Pick<Figure, 'name' | 'unit' | 'better' | 'goal' | 'goalRatio'> & { compare?: Figure['compare'] };

/** Median of several runs after a warm-up. `work` answers what it measured, in the figure's unit. */
export async function measure(figure: Named, work: () => number | Promise<number>, runs = 5): Promise<Figure> {
  await work();
  const values: number[] = [];
  for (let run = 0; run < runs; run += 1) values.push(await work());
  return median(figure, values);
}

/** Median of values measured already. */
export function median(figure: Named, values: readonly number[]): Figure {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = Math.floor(sorted.length / 2);
  const value = sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
  return compared(figure, value, sorted);
}

/** A figure from values measured already: the given quantile of them (nearest rank). */
export function summarise(figure: Named, values: readonly number[], quantile: number): Figure {
  const sorted = [...values].sort((a, b) => a - b);
  return compared(figure, sorted[Math.max(0, Math.ceil(quantile * sorted.length) - 1)], sorted);
}

/** A figure measured once. */
export function single(figure: Named, value: number): Figure {
  return compared(figure, value, [value]);
}

function compared(figure: Named, value: number, sorted: readonly number[]): Figure {
  const compare = figure.compare ?? null;
  const ratio = compare === null ? null : figure.better === 'lower' ? compare.value / value : value / compare.value;
  return { ...figure, value, compare, ratio, runs: sorted.length, spread: [sorted[0], sorted[sorted.length - 1]] };
}

/** Milliseconds that some work takes. */
export async function milliseconds(work: () => unknown): Promise<number> {
  const startedAt = performance.now();
  await work();
  return performance.now() - startedAt;
}

/** Seconds of this process's processor time that some work takes, all threads together. */
export function processorSeconds(work: () => unknown): number {
  const before = process.cpuUsage();
  work();
  const { user, system } = process.cpuUsage(before);
  return (user + system) / 1e6;
}

/** Whether a figure is what is asked for; null where nothing is asked or the comparison was absent. */
export function isMet({ value, better, ratio, goal, goalRatio }: Figure): boolean | null {
  const asked: boolean[] = [];
  if (goal !== undefined) asked.push(better === 'lower' ? value <= goal : value >= goal);
  if (goalRatio !== undefined && ratio !== null) asked.push(ratio >= goalRatio);
  return asked.length === 0 ? null : asked.every(Boolean);
}
