/** The spans over which counts are scored. Shifts are thirds of the day here: the log knows no site's shifts. */
export const countLevels = ['hour', 'shift', 'day', 'week'] as const;
export type CountLevel = (typeof countLevels)[number];

export const hoursPerLevel: Record<CountLevel, number> = { hour: 1, shift: 8, day: 24, week: 168 };

/** Sums hours [from, to) of a series in runs of `width` hours; the length must be a multiple of it. */
export function sumRuns(values: Float64Array, from: number, to: number, width: number): Float64Array {
  if ((to - from) % width !== 0) throw new RangeError(`${to - from} hours are no multiple of ${width}`);
  const sums = new Float64Array((to - from) / width);
  for (let i = from; i < to; i += 1) sums[Math.floor((i - from) / width)] += values[i];
  return sums;
}
