/** Minutes of the local day on which more times stand than chance would put there. */
export interface Heap {
  kind: 'full hour' | 'end of day' | 'shift end';
  /** Minute of the day; null for the full hours together. */
  minute: number | null;
  times: number;
  /** As many would stand there if they were spread as around it. */
  expected: number;
}

const minutesOfDay = 1440;
/** Fewer times say nothing about their minutes. */
const leastTimes = 200;
/** In standard deviations of a Poisson count: no file has this by chance. */
const leastScore = 6;

/**
 * Heaping of recorded times: at full hours (against one in sixty), at 23:59 (against the quarter of an
 * hour before it), and within five minutes of a shift's end (against the same minutes of the two hours
 * before and after). Each must be that much too many and six standard deviations clear.
 * @param byMinute times by minute of the local day, 1,440 counts
 * @param shiftEnds minutes of the day
 */
export function findHeaps(byMinute: Uint32Array, shiftEnds: readonly number[]): Heap[] {
  const total = byMinute.reduce((sum, count) => sum + count, 0);
  if (total < leastTimes) return [];
  const heaps: Heap[] = [];
  const judge = (heap: Heap, leastRatio: number, error: number) => {
    const score = (heap.times - heap.expected) / Math.max(1, error);
    if (heap.times > leastRatio * heap.expected && score > leastScore) heaps.push(heap);
  };
  const sum = (from: number, length: number) => {
    let times = 0;
    for (let minute = from; minute < from + length; minute += 1)
      times += byMinute[(minute + minutesOfDay) % minutesOfDay];
    return times;
  };

  let onTheHour = 0;
  for (let minute = 0; minute < minutesOfDay; minute += 60) onTheHour += byMinute[minute];
  judge({ kind: 'full hour', minute: null, times: onTheHour, expected: total / 60 }, 2, Math.sqrt(total / 60));

  const before = sum(minutesOfDay - 16, 15) / 15;
  judge(
    { kind: 'end of day', minute: minutesOfDay - 1, times: byMinute[minutesOfDay - 1], expected: before },
    3,
    Math.sqrt(before * (1 + 1 / 15)),
  );

  for (const minute of [...new Set(shiftEnds)].sort((a, b) => a - b)) {
    const around = [-120, -60, 60, 120].reduce((times, shift) => times + sum(minute + shift - 5, 11), 0) / 4;
    judge(
      { kind: 'shift end', minute, times: sum(minute - 5, 11), expected: around },
      1.5,
      Math.sqrt(around * (1 + 1 / 4)),
    );
  }
  return heaps;
}
