import type { Database } from '../server/database/database.ts';
import { VisitLog } from '../server/entities/VisitLog.ts';
import { localDate, makeZone } from '../shared/domain/zoned-time.ts';
import { censusAt } from './census-at.ts';
import type { DemoCaller } from './demo-caller.ts';
import { demoSeed, demoSites, type DemoSite } from './farrowmere.ts';
import { makeVisitLog } from './make-visit-log.ts';
import { writeVisitCsv } from './write-visit-csv.ts';

const day = 86_400;
/** Visits still open when a log was taken are sent again, so that their departures are learnt. */
const overlapDays = 4;

/** Waits for a job of the product; a failed one ends the demo's start with its reason. */
export async function finishJob(caller: DemoCaller, siteId: string, jobId: string): Promise<void> {
  for (;;) {
    const { jobs } = (await caller.get(`/api/sites/${siteId}/jobs`)) as {
      jobs: { id: string; status: string; title: string; error: string | null }[];
    };
    const job = jobs.find((candidate) => candidate.id === jobId);
    if (job?.status === 'done') return;
    if (job?.status === 'failed' || job?.status === 'cancelled')
      throw new Error(`${job.title}: ${job.error ?? job.status}`);
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
}

/** Loads the visits that arrived in [from, now) through the product's own upload. */
export async function loadVisits(
  steward: DemoCaller,
  site: DemoSite,
  from: number,
  now: number,
  fileName: string,
): Promise<void> {
  const visits = makeVisitLog({ site, from, to: now, seed: demoSeed });
  const path = `/api/sites/${site.id}/visit-logs`;
  const check = (await steward.upload(
    `${path}/checks?fileName=${encodeURIComponent(fileName)}`,
    'text/csv',
    writeVisitCsv(visits, site.areas),
  )) as { checkId: string };
  const { jobId } = (await steward.send('POST', path, {
    checkId: check.checkId,
    goodRowsOnly: false,
    facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' },
  })) as { jobId: string };
  await finishJob(steward, site.id, jobId);
}

/** Brings every site's log up to now, if the newest is more than an hour behind. */
export async function topUpVisits(database: Database, steward: DemoCaller, now: number): Promise<number> {
  let topped = 0;
  for (const site of demoSites) {
    const newest = await database.read.maximum(VisitLog, 'takenAt', { siteId: site.id, status: 'ready' });
    if (newest === null || now - newest < 3600) continue;
    const zone = makeZone(site.timeZone);
    const local = zone.toLocal(newest - overlapDays * day);
    const midnight = zone.fromLocal(local - (local % day)).at(0) ?? newest - overlapDays * day;
    await loadVisits(steward, site, midnight, now, `${site.id} to ${localDate(zone.toLocal(now))}.csv`);
    topped += 1;
  }
  return topped;
}

/** Enters a head count of every area as of some minutes ago, as a charge nurse would have. */
export async function enterDemoCensus(charge: DemoCaller, now: number, minutesAgo: number): Promise<void> {
  const takenAt = now - minutesAgo * 60;
  for (const site of demoSites) {
    const visits = makeVisitLog({ site, from: takenAt - 5 * day, to: takenAt, seed: demoSeed, withUnrecorded: true });
    const zone = makeZone(site.timeZone);
    const local = zone.toLocal(takenAt);
    const midnight = zone.fromLocal(local - (local % day)).at(0) ?? takenAt;
    await charge.send('POST', `/api/sites/${site.id}/censuses`, {
      takenAt,
      areas: censusAt(
        visits,
        takenAt,
        site.areas.map((area) => area.id),
      ),
      undecidedWaiting: 0,
      ambulancesHolding: 0,
      arrivalsSinceMidnight: visits.filter((visit) => visit.arrivalAt >= midnight && visit.arrivalAt <= takenAt).length,
    });
  }
}
