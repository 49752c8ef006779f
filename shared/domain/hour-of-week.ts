import type { Zone } from './zoned-time.ts';

export const hoursOfWeek = 168;

/** Local hours from 1970-01-01 00:00 on the wall clock: floor(localSeconds / 3600). */
export type LocalHour = number;

/** Hour of week, 0 (Monday 00:00) .. 167 (Sunday 23:00), of a local hour; 1970-01-01 was a Thursday. */
export function hourOfWeek(localHour: LocalHour): number {
  return (((localHour + 72) % hoursOfWeek) + hoursOfWeek) % hoursOfWeek;
}

/** The local hour that an instant belongs to. */
export function localHourAt(zone: Zone, utcSeconds: number): LocalHour {
  return Math.floor(zone.toLocal(utcSeconds) / 3600);
}

/**
 * Real elapsed hours that carry each local hour's label within [fromUtc, toUtc).
 * The repeated hour of autumn holds 2, the skipped hour of spring 0, a half-hour change 1.5 or 0.5.
 * @returns first local hour of the window and one figure for each local hour from it, hours.
 * Cost: linear in the number of hours.
 */
export function exposureByLocalHour(
  zone: Zone,
  fromUtc: number,
  toUtc: number,
): { firstLocalHour: LocalHour; hours: Float64Array } {
  if (!(toUtc > fromUtc)) throw new RangeError('exposure window must end after it starts');
  let firstLocalHour = localHourAt(zone, fromUtc);
  let lastLocalHour = localHourAt(zone, toUtc - 1);
  const cuts = zone.changesBetween(fromUtc, toUtc - 1);
  for (const cut of cuts) {
    firstLocalHour = Math.min(firstLocalHour, localHourAt(zone, cut.at));
    lastLocalHour = Math.max(lastLocalHour, localHourAt(zone, cut.at - 1));
  }
  const hours = new Float64Array(lastLocalHour - firstLocalHour + 1);
  const ends = [...cuts.map((cut) => cut.at), toUtc];
  let from = fromUtc;
  for (const end of ends) {
    const offset = zone.offsetAt(from);
    let at = from;
    while (at < end) {
      const localHour = Math.floor((at + offset) / 3600);
      const next = Math.min(end, (localHour + 1) * 3600 - offset);
      hours[localHour - firstLocalHour] += (next - at) / 3600;
      at = next;
    }
    from = end;
  }
  return { firstLocalHour, hours };
}
