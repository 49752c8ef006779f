import type { Zone } from '../domain/zoned-time.ts';
import type { RateGrid } from './arrival-model.ts';

/**
 * Cuts [fromUtc, toUtc) wherever a local hour begins or the clock changes.
 * @returns stretches in order of time: label, start (UTC seconds), length (hours). The repeated hour of autumn gives two
 * stretches of one label. Throws a RangeError unless the end is after the start. Cost: linear in hours.
 */
export function makeRateGrid(zone: Zone, fromUtc: number, toUtc: number): RateGrid {
  if (!(toUtc > fromUtc)) throw new RangeError(`rate grid must end after it starts, got ${fromUtc} to ${toUtc}`);
  const ends = [...zone.changesBetween(fromUtc, toUtc - 1).map((change) => change.at), toUtc];
  const labels: number[] = [];
  const starts: number[] = [];
  const lengths: number[] = [];
  let at = fromUtc;
  for (const end of ends) {
    const offset = zone.offsetAt(at);
    while (at < end) {
      const label = Math.floor((at + offset) / 3600);
      const next = Math.min(end, (label + 1) * 3600 - offset);
      labels.push(label);
      starts.push(at);
      lengths.push((next - at) / 3600);
      at = next;
    }
  }
  return {
    localHour: Int32Array.from(labels),
    startAt: Float64Array.from(starts),
    hours: Float64Array.from(lengths),
  };
}

/** A grid from local hours alone, where no zone is at hand: stretch i lasts `hours[i]`; those of no length are left out. */
export function gridOfLocalHours(firstLocalHour: number, hours: ArrayLike<number>): RateGrid {
  const labels: number[] = [];
  const lengths: number[] = [];
  const starts: number[] = [];
  let at = firstLocalHour * 3600;
  for (let i = 0; i < hours.length; i += 1) {
    const length = hours[i];
    if (!(length > 0)) continue;
    labels.push(firstLocalHour + i);
    starts.push(at);
    lengths.push(length);
    at += length * 3600;
  }
  return { localHour: Int32Array.from(labels), startAt: Float64Array.from(starts), hours: Float64Array.from(lengths) };
}

/** The hours of the week that a grid touches, ascending, and each stretch's place among them. */
export function distinctHoursOfWeek(hoursOfWeek: Int32Array): { hours: number[]; place: Int32Array } {
  const hours = [...new Set(hoursOfWeek)].sort((a, b) => a - b);
  const index = new Map(hours.map((hour, i) => [hour, i]));
  return { hours, place: hoursOfWeek.map((hour) => index.get(hour) ?? 0) };
}
