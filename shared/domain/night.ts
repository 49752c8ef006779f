import { instantOfLocal, type ShiftPattern } from './shift-times.ts';
import { localDate, type Zone } from './zoned-time.ts';

/** A night, UTC seconds. */
export interface Night {
  /** The date on which it starts, YYYY-MM-DD: Wednesday 02:00 is Tuesday night. */
  date: string;
  from: number;
  to: number;
  /** The end of the night before: what is done from then on is done towards this night. */
  since: number;
}

/** Where no shift crosses midnight. Common practice, no source. */
const usualNight = { startMinute: 20 * 60, endMinute: 8 * 60 };

/**
 * The night that an instant lies in, or the next one to come: by day, what is done is done towards the
 * coming night. A site's night is its shift that crosses local midnight; of several the one that ends last.
 * Cost: four nights looked at.
 */
export function nightOf(zone: Zone, shifts: readonly Omit<ShiftPattern, 'name'>[], at: number): Night {
  const pattern = shifts
    .filter((shift) => shift.endMinute <= shift.startMinute && shift.endMinute > 0)
    .reduce<Omit<ShiftPattern, 'name'> | null>(
      (last, shift) => (last && last.endMinute >= shift.endMinute ? last : shift),
      null,
    );
  const { startMinute, endMinute } = pattern ?? usualNight;
  const today = Math.floor(zone.toLocal(at) / 86_400);
  const nightFrom = (day: number) => ({
    date: localDate(day * 86_400),
    from: instantOfLocal(zone, day * 86_400 + startMinute * 60),
    to: instantOfLocal(zone, (day + 1) * 86_400 + endMinute * 60),
  });
  let before = nightFrom(today - 2);
  for (let day = today - 1; ; day += 1) {
    const night = nightFrom(day);
    if (night.to > at) return { ...night, since: before.to };
    before = night;
  }
}
