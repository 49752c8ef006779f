import { setImmediate as nextTurn } from 'node:timers/promises';
import type { EntityManager } from 'typeorm';
import type { CareArea } from '../entities/CareArea.ts';
import type { Site } from '../entities/Site.ts';
import { ExposureGapRow } from '../entities/ExposureGapRow.ts';
import { VisitLog } from '../entities/VisitLog.ts';
import { countingSpans } from './counting-spans.ts';
import { coveredSpans } from './covered-spans.ts';

const hour = 3600;
/** A census speaks for a full hour when it was taken within this of it. */
const censusReach = 1800;
/** Visits are read by this much arrival time at once, so that no read holds up the others. */
const daysAtOnce = 7;

/**
 * Everyone in each area's care at the given instants: the nearest census within half an hour, else the visits of the logs
 * that speak for it, else null (never zero).
 * @param hours UTC seconds, ascending
 * @returns by area in the order given, one figure an instant
 * Cost: one look at each visit of the time; about 50 ms for eight weeks of 250 visits a day, with others let through between.
 */
export async function readPresent(
  read: EntityManager,
  site: Site,
  areas: readonly CareArea[],
  hours: readonly number[],
  now: number,
): Promise<(number | null)[][]> {
  if (hours.length === 0) return areas.map(() => []);
  const present = await presentInLogs(read, site, areas, hours, now);
  const counts = await read.query<{ areaId: string; takenAt: number; present: number }[]>(
    `SELECT area.areaId, area.takenAt, area.present FROM census_area area JOIN census ON census.id = area.censusId
     WHERE census.siteId = ? AND census.takenAt BETWEEN ? AND ? ORDER BY area.savedAt, area.rowid`,
    [site.id, hours[0] - censusReach, hours[hours.length - 1] + censusReach],
  );
  const indexOf = new Map(areas.map(({ id }, index) => [id, index]));
  const distances = areas.map(() => new Float64Array(hours.length).fill(Infinity));
  for (const { areaId, takenAt, present: count } of counts) {
    const area = indexOf.get(areaId);
    if (area === undefined) continue;
    for (let index = firstAtOrAfter(hours, takenAt - censusReach); index < hours.length; index += 1) {
      const distance = Math.abs(hours[index] - takenAt);
      if (hours[index] > takenAt + censusReach) break;
      // Of two as near, the one saved later.
      if (distance > distances[area][index]) continue;
      distances[area][index] = distance;
      present[area][index] = count;
    }
  }
  return present;
}

/** The same by the logs alone: null where no log speaks for an instant. Instants need not be full hours. */
export async function presentInLogs(
  read: EntityManager,
  site: Site,
  areas: readonly CareArea[],
  hours: readonly number[],
  now: number,
): Promise<(number | null)[][]> {
  const reach = site.stayCapHours * hour;
  // Hourly counts tell of arrivals, and not of who was there.
  const logs = await read.find(VisitLog, { where: { siteId: site.id, status: 'ready', kind: 'visits' } });
  const facts = logs.map((log) => ({ periodFrom: log.periodFrom, periodTo: log.periodTo, facts: log }));
  // Before the longest stay has passed since a log's start, who came earlier is missing from it.
  const spoken = coveredSpans(facts, now, reach).map(({ from, to }) => ({ from: from + reach, to }));
  const known = hours.map((at) => spoken.some((span) => span.from <= at && at < span.to));
  if (!known.includes(true)) return areas.map(() => hours.map(() => null));
  const first = hours[known.indexOf(true)];
  const last = hours[known.lastIndexOf(true)];
  const indexOfCode = new Map(areas.map(({ code }, index) => [code, index]));
  // Plus one where a visit begins to be there, minus one where it is gone.
  const changes = areas.map(() => new Int32Array(hours.length + 1));
  const spans = countingSpans(logs);
  for (const log of logs) {
    for (const span of spans.get(log.number) ?? []) {
      const to = Math.min(span.to, last + 1);
      for (let from = Math.max(span.from, first - reach); from < to; from += daysAtOnce * 24 * hour) {
        const visits = await read.query<{ areaCode: number; arrivalAt: number; departureAt: number | null }[]>(
          'SELECT areaCode, arrivalAt, departureAt FROM visit WHERE logNumber = ? AND arrivalAt >= ? AND arrivalAt < ?',
          [log.number, from, Math.min(to, from + daysAtOnce * 24 * hour)],
        );
        for (const { areaCode, arrivalAt, departureAt } of visits) {
          const area = indexOfCode.get(areaCode);
          // Without a departure: still there when the extract was taken, or not known; then it is not counted.
          if (area === undefined || (departureAt === null && log.missingDeparture === 'unknown')) continue;
          changes[area][firstAtOrAfter(hours, arrivalAt)] += 1;
          changes[area][firstAtOrAfter(hours, Math.max(arrivalAt, departureAt ?? log.takenAt + 1))] -= 1;
        }
        await nextTurn();
      }
    }
  }
  // In an outage visits were not recorded: who was there is not known.
  const outages = await read.findBy(ExposureGapRow, { siteId: site.id, kind: 'outage' });
  return changes.map((own, area) => {
    const silent = outages.filter(({ areaId }) => areaId === null || areaId === areas[area].id);
    let count = 0;
    return known.map((is, index) => {
      count += own[index];
      const at = hours[index];
      return is && !silent.some(({ fromAt, untilAt }) => fromAt <= at && at < untilAt) ? count : null;
    });
  });
}

/** Index of the first instant at or after one; the length if all lie before. */
function firstAtOrAfter(hours: readonly number[], at: number): number {
  let low = 0;
  let high = hours.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (hours[middle] >= at) high = middle;
    else low = middle + 1;
  }
  return low;
}
