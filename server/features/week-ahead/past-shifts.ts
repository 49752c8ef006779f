import type { EntityManager } from 'typeorm';
import type { WeekAhead } from '../../../shared/api/week-outlooks.ts';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readPresent } from '../../database/read-present.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { readStaffedThen } from '../../database/read-staffed-then.ts';
import type { Site } from '../../entities/Site.ts';

const hour = 3600;
const shiftsShown = 3;

/** The last shifts before the one under way: the most patients at a full hour of each, and the beds staffed at its start. */
export async function readPastShifts(read: EntityManager, site: Site, now: number): Promise<WeekAhead['past']> {
  const zone = makeZone(site.timeZone);
  const shifts = shiftsBetween(zone, await readShifts(read, site.id), now - 4 * 86_400, now);
  const current = shiftInCharge(shifts, now);
  const before = shifts.filter(({ from }) => from < (current?.from ?? now)).slice(-shiftsShown);
  const first = before.at(0)?.from;
  if (first === undefined) return [];
  const areas = await readAreas(read, site.id);
  const rest = ((zone.toLocal(first) % hour) + hour) % hour;
  const last = before[before.length - 1].to;
  const hours: number[] = [];
  for (let at = first + ((hour - rest) % hour); at < Math.min(last, now); at += hour) hours.push(at);
  const present = await readPresent(read, site, areas, hours, now);
  const ids = areas.map(({ id }) => id);
  const steps = await readStaffedThen(read, site.id, zone, ids, first, now);
  const all = hours.map((_, h) =>
    present.reduce<number | null>((sum, own) => (sum === null || own[h] === null ? null : sum + own[h]), 0),
  );
  const highest = (counts: readonly (number | null)[], from: number, to: number): number | null => {
    const within = counts.filter((_, h) => hours[h] >= from && hours[h] < to);
    const known = within.filter((count) => count !== null);
    // A shift counted for less than half its hours may have missed its peak.
    return known.length * 2 >= within.length && known.length > 0 ? Math.max(...known) : null;
  };
  return before.map(({ name, from, to }) => ({
    name,
    from,
    to,
    most: highest(all, from, to),
    areas: areas.map(({ id }, a) => {
      const own = steps.get(id) ?? [];
      return { areaId: id, most: highest(present[a], from, to), staffed: own.length > 0 ? bedsAt(own, from) : 0 };
    }),
  }));
}
