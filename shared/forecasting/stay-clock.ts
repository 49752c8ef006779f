import type { Zone } from '../domain/zoned-time.ts';
import { localSecondsOf } from '../domain/zoned-time.ts';

const quarterHour = 900;

/** Local days, counted from 1970-01-01, that count as weekend for departures. */
export function holidayNumbers(dates: readonly string[]): Set<number> {
  return new Set(dates.map((date) => Math.floor(localSecondsOf(date) / 86_400)));
}

/**
 * The block that a local hour belongs to: block of the day, plus the number of blocks a day on weekends and holidays.
 * @param blockHours hours a block, a divisor of 24.
 */
export function blockOf(localHour: number, blockHours: number, holidays: ReadonlySet<number>): number {
  const day = Math.floor(localHour / 24);
  // 1970-01-01 was a Thursday: days 2 and 3 are Saturday and Sunday.
  const weekday = ((day % 7) + 7) % 7;
  const block = Math.floor((localHour - 24 * day) / blockHours);
  return weekday === 2 || weekday === 3 || holidays.has(day) ? block + 24 / blockHours : block;
}

/** Stretches of real time that share one block of one local day, back to back. */
export interface BlockCells {
  /** Start of each cell, UTC seconds, and the end of the last: one more entry than cells. */
  startAt: Float64Array;
  block: Uint8Array;
  /** Local day number of each cell for days that begin at midnight, and for days that begin at 04:00. */
  dayAtMidnight: Int32Array;
  dayAtFour: Int32Array;
}

/** Cuts [from, to) into cells. Clock changes only lengthen or shorten cells. Cost: one step a quarter of an hour. */
export function cutBlocks(
  zone: Zone,
  from: number,
  to: number,
  blockHours: number,
  holidays: ReadonlySet<number>,
): BlockCells {
  const startAt: number[] = [];
  const block: number[] = [];
  const dayAtMidnight: number[] = [];
  const dayAtFour: number[] = [];
  let before = Number.NaN;
  for (let at = from; at < to; at += quarterHour - (((at % quarterHour) + quarterHour) % quarterHour)) {
    const localHour = Math.floor(zone.toLocal(at) / 3600);
    const key = Math.floor(localHour / blockHours);
    if (key === before) continue;
    before = key;
    startAt.push(at);
    block.push(blockOf(localHour, blockHours, holidays));
    dayAtMidnight.push(Math.floor(localHour / 24));
    dayAtFour.push(Math.floor((localHour - 4) / 24));
  }
  startAt.push(to);
  return {
    startAt: Float64Array.from(startAt),
    block: Uint8Array.from(block),
    dayAtMidnight: Int32Array.from(dayAtMidnight),
    dayAtFour: Int32Array.from(dayAtFour),
  };
}

/** Index of the cell that holds an instant within the cells' span; a guess by the cells' usual length, then a short walk. */
export function cellAt(cells: BlockCells, at: number, blockHours: number): number {
  const last = cells.startAt.length - 2;
  let index = Math.floor((at - cells.startAt[0]) / (3600 * blockHours));
  if (index > last) index = last;
  if (index < 0) index = 0;
  while (index > 0 && cells.startAt[index] > at) index -= 1;
  while (index < last && cells.startAt[index + 1] <= at) index += 1;
  return index;
}
