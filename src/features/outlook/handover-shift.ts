import type { Site } from '../../../shared/api/sites.ts';
import { nightOf } from '../../../shared/domain/night.ts';
import { shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';

/**
 * The shift that is handed over to: while two overlap the one that came in, otherwise the next to start. A site
 * without shifts hands over to its night.
 */
export function handoverShift(zone: Zone, shifts: Site['shifts'], now: number): ShiftTime {
  const around = shiftsBetween(zone, shifts, now - 3600, now + 2 * 86_400);
  const running = around.filter((shift) => shift.from <= now && now < shift.to);
  const incoming = running.length > 1 ? shiftInCharge(running, now) : null;
  const next = incoming ?? around.find((shift) => shift.from > now);
  if (next) return next;
  const { from, to } = nightOf(zone, shifts, now);
  return { name: 'Night', from, to };
}
