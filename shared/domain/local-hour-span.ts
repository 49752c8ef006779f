import { exposureByLocalHour } from './hour-of-week.ts';
import { localDate, type Zone } from './zoned-time.ts';

/** First and last instant that carry a local hour's label, the end left out: two hours where the label comes twice. */
export function instantsOfLocalHour(zone: Zone, localHour: number): { from: number; to: number } {
  const starts = zone.fromLocal(localHour * 3600);
  const ends = zone.fromLocal(localHour * 3600 + 3599);
  const first = starts.at(0) ?? ends.at(0);
  const last = ends.at(-1) ?? starts.at(-1);
  if (first === undefined || last === undefined) {
    throw new RangeError(`the clock change skipped local hour ${String(localHour)}`);
  }
  if (starts.length > 0 && ends.length > 0) return { from: first, to: last + 1 };
  // A half-hour change cuts the label: what there is of it lies around the change.
  const { firstLocalHour, hours } = exposureByLocalHour(zone, first - 3600, first + 3600);
  const lasted = hours[localHour - firstLocalHour] * 3600;
  return starts.length > 0 ? { from: first, to: first + lasted } : { from: last + 1 - lasted, to: last + 1 };
}

/** A local hour as a person writes it: "2026-03-04 03:00". */
export function hourText(localHour: number): string {
  return `${localDate(localHour * 3600)} ${String(((localHour % 24) + 24) % 24).padStart(2, '0')}:00`;
}
