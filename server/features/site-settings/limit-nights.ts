import { setImmediate as nextTurn } from 'node:timers/promises';
import { Between, type EntityManager } from 'typeorm';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { nightOf, type Night } from '../../../shared/domain/night.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { nightChance, ranShortInNight, type LimitNight } from '../../../shared/forecasting/limit-record.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { readPresent } from '../../database/read-present.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { readStaffedThen } from '../../database/read-staffed-then.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import type { Site } from '../../entities/Site.ts';

const hour = 3600;
export const recordWeeks = 8;
/** An outlook older than this does not stand any more when the night begins. */
const standsFor = 12 * hour;

/**
 * The nights of the last eight weeks by area: what the outlook that stood at the night's start printed, and whether the
 * area then ran short, by the plan and the changes of that time.
 * Cost: one outlook read a night (a few milliseconds, with others let through between), and one look at the time's visits.
 */
export async function readLimitNights(
  read: EntityManager,
  site: Site,
  now: number,
): Promise<{ from: number; to: number; areas: { areaId: string; nights: LimitNight[] }[] }> {
  const zone = makeZone(site.timeZone);
  const areas = await readAreas(read, site.id);
  const nights = nightsBetween(zone, await readShifts(read, site.id), now - recordWeeks * 7 * 24 * hour, now);
  if (nights.length === 0) return { from: now, to: now, areas: areas.map(({ id }) => ({ areaId: id, nights: [] })) };
  const from = nights[0].from;
  const to = nights[nights.length - 1].to;
  const hoursOf = nights.map((night) => fullHoursIn(zone, night));
  const hours = hoursOf.flat();
  const present = await readPresent(read, site, areas, hours, now);
  const areaIds = areas.map(({ id }) => id);
  const staffed = await readStaffedThen(read, site.id, zone, areaIds, from, to);
  const issued = await read.find(OutlookRow, {
    where: { siteId: site.id, issuedAt: Between(from - standsFor, to) },
    select: { id: true, issuedAt: true },
    order: { issuedAt: 'ASC' },
  });

  const found = areas.map(({ id }) => ({ areaId: id, nights: [] as LimitNight[] }));
  let first = 0;
  for (const [index, night] of nights.entries()) {
    const own = hoursOf[index];
    const standing = issued.findLast(({ issuedAt }) => issuedAt <= night.from && issuedAt > night.from - standsFor);
    const outlook = standing ? await readOutlook(read, standing.id) : null;
    for (const [place, area] of areas.entries()) {
      const printed = outlook?.result.areas.find(({ areaId }) => areaId === area.id);
      const spaces = outlook?.areas.find(({ areaId }) => areaId === area.id)?.spaces ?? area.spaces;
      const steps = staffed.get(area.id) ?? [];
      found[place].nights.push({
        date: night.date,
        chance: outlook && printed ? nightChance(outlook.result.hours, printed, spaces, night.from, night.to) : null,
        ranShort:
          steps.length === 0
            ? null
            : ranShortInNight(
                present[place].slice(first, first + own.length),
                own.map((at) => bedsAt(steps, at)),
              ),
      });
    }
    first += own.length;
    await nextTurn();
  }
  return { from, to, areas: found };
}

/** Whole nights within [from, to], ascending. */
function nightsBetween(zone: Zone, shifts: Parameters<typeof nightOf>[1], from: number, to: number): Night[] {
  const nights: Night[] = [];
  for (let night = nightOf(zone, shifts, from); night.to <= to; night = nightOf(zone, shifts, night.to)) {
    if (night.from >= from) nights.push(night);
  }
  return nights;
}

/** The full local hours of a night, UTC seconds. */
function fullHoursIn(zone: Zone, { from, to }: Night): number[] {
  const hours: number[] = [];
  for (let at = from; at < to; at += hour) {
    const rest = ((zone.toLocal(at) % hour) + hour) % hour;
    if (rest > 0) at += hour - rest;
    if (at < to) hours.push(at);
  }
  return hours;
}

async function readOutlook(
  read: EntityManager,
  id: string,
): Promise<{ result: OutlookResult; areas: OutlookInput['areas'] }> {
  const [row] = await read.query<{ result: string; areas: string }[]>(
    `SELECT result, json_extract(input, '$.areas') AS areas FROM outlook WHERE id = ?`,
    [id],
  );
  return { result: JSON.parse(row.result) as OutlookResult, areas: JSON.parse(row.areas) as OutlookInput['areas'] };
}
