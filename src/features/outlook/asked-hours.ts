import type { Site } from '../../../shared/api/sites.ts';
import { shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import type { BoardArea } from './tonight-board.ts';

/** When the shift in charge came in, UTC seconds; long ago where none is. */
export function inChargeSince(zone: Zone, shifts: Site['shifts'], now: number): number {
  return shiftInCharge(shiftsBetween(zone, shifts, now, now + 1), now)?.from ?? -Infinity;
}

/**
 * Hours of tonight past the limit that no acknowledgement of the shift in charge speaks of: what the panel asks about.
 * What the shift before acknowledged stays to be read, but whoever came in since has not seen the risk yet.
 */
export function askedHours({
  pastTonight,
  acknowledgements,
  since,
}: Pick<BoardArea, 'pastTonight' | 'acknowledgements' | 'since'>): number[] {
  const own = acknowledgements.filter((made) => made.at >= since);
  return pastTonight.filter((hour) => !own.some((made) => made.hours.includes(hour)));
}
