import type { EntityManager } from 'typeorm';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import type { Tonight } from '../../../shared/api/outlooks.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import { countingSpans, type Span } from '../../database/counting-spans.ts';
import { coveredSpans } from '../../database/covered-spans.ts';
import { readStaffedBedSteps } from '../../database/read-staffed-beds.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import { Census } from '../../entities/Census.ts';
import { CensusArea } from '../../entities/CensusArea.ts';
import type { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';

const hour = 3600;
/** A census speaks for a full hour when it was taken within this of it. */
const censusReach = 1800;

type PastHour = Tonight['past'][number];

/**
 * What was there at each of the last full local hours: the nearest census within half an hour, else the
 * visits that an accepted log holds at that hour, else nothing (never zero).
 */
export async function readPastHours(
  read: EntityManager,
  site: Site,
  areas: readonly CareArea[],
  zone: Zone,
  now: number,
  count: number,
): Promise<PastHour[]> {
  const rest = ((zone.toLocal(now) % hour) + hour) % hour;
  const hours = Array.from({ length: count }, (_, index) => now - rest - (count - 1 - index) * hour);
  const from = hours[0];
  const steps = await readStaffedBedSteps(
    read,
    site.id,
    zone,
    areas.map((area) => area.id),
    from - hour,
    now + 1,
  );
  const counts = await nearestCounts(read, site.id, from, now);
  const logged = await presentInLogs(read, site, hours, now);
  return hours.map((at) => ({
    at,
    areas: areas.map((area) => {
      const staffed = bedsAt(steps?.get(area.id) ?? [{ at: from, beds: 0 }], at);
      const near = counts
        .filter((entry) => entry.areaId === area.id && Math.abs(entry.takenAt - at) <= censusReach)
        .sort((a, b) => Math.abs(a.takenAt - at) - Math.abs(b.takenAt - at))
        .at(0);
      if (near) return { areaId: area.id, present: near.present, staffed, source: 'census' as const };
      const present = logged.get(at)?.get(area.code);
      if (present === undefined) return { areaId: area.id, present: null, staffed, source: null };
      return { areaId: area.id, present, staffed, source: 'log' as const };
    }),
  }));
}

/** The time that a site's ready logs speak for, ascending. */
export function coveredByLogs(logs: readonly VisitLog[], site: Site, now: number): Span[] {
  const facts = logs.map((log) => ({ periodFrom: log.periodFrom, periodTo: log.periodTo, facts: log }));
  return coveredSpans(facts, now, site.stayCapHours * hour);
}

async function nearestCounts(read: EntityManager, siteId: string, from: number, to: number): Promise<CensusArea[]> {
  return read
    .createQueryBuilder(CensusArea, 'area')
    .innerJoin(Census, 'census', 'census.id = area.censusId')
    .where('census.siteId = :siteId AND census.takenAt BETWEEN :from AND :to', {
      siteId,
      from: from - censusReach,
      to: to + censusReach,
    })
    .orderBy('area.savedAt', 'DESC')
    .addOrderBy('area.rowid', 'DESC')
    .getMany();
}

/** Visits present at each hour by area code, for the hours that a ready log covers; an area without a row there holds nobody. */
async function presentInLogs(
  read: EntityManager,
  site: Site,
  hours: readonly number[],
  now: number,
): Promise<Map<number, Map<number, number>>> {
  const reach = site.stayCapHours * hour;
  // Hourly counts tell of arrivals, and not of who was there.
  const logs = await read.find(VisitLog, { where: { siteId: site.id, status: 'ready', kind: 'visits' } });
  const spans = countingSpans(logs);
  const found = new Map<number, Map<number, number>>();
  // Before the longest stay has passed since a log's start, who came earlier is missing from it.
  const spoken = coveredByLogs(logs, site, now).map(({ from, to }) => ({ from: from + reach, to }));
  const codes = await read.query<{ code: number }[]>('SELECT code FROM care_area WHERE siteId = ?', [site.id]);
  for (const at of hours) {
    if (spoken.some((span) => span.from <= at && at < span.to))
      found.set(at, new Map(codes.map(({ code }) => [code, 0])));
  }
  if (found.size === 0) return found;
  const first = Math.min(...found.keys());
  const last = Math.max(...found.keys());
  for (const log of logs) {
    for (const span of spans.get(log.number) ?? []) {
      const from = Math.max(span.from, first - reach);
      const to = Math.min(span.to, last + 1);
      if (from >= to) continue;
      const visits = await read.query<{ areaCode: number; arrivalAt: number; departureAt: number | null }[]>(
        `SELECT areaCode, arrivalAt, departureAt FROM visit
         WHERE logNumber = ? AND arrivalAt >= ? AND arrivalAt < ? AND (departureAt IS NULL OR departureAt > ?)`,
        [log.number, from, to, first],
      );
      for (const visit of visits) {
        // Without a departure: still there when the extract was taken, or not known; then it is not counted.
        if (visit.departureAt === null && log.missingDeparture === 'unknown') continue;
        const end = visit.departureAt ?? log.takenAt + 1;
        for (const [at, areas] of found) {
          if (visit.arrivalAt <= at && at < end) areas.set(visit.areaCode, (areas.get(visit.areaCode) ?? 0) + 1);
        }
      }
    }
  }
  return found;
}
