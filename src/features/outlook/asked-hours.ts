import type { BoardArea } from './tonight-board.ts';

/** Hours of tonight past the limit that no acknowledgement speaks of: what the panel asks about. */
export function askedHours(row: Pick<BoardArea, 'pastTonight' | 'acknowledgements'>): number[] {
  return row.pastTonight.filter((hour) => !row.acknowledgements.some((made) => made.hours.includes(hour)));
}
