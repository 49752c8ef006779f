import type { EntityManager } from 'typeorm';
import { In } from 'typeorm';
import type { LastWeek, WeekAhead, WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { coveredSpans } from '../../database/covered-spans.ts';
import { readArrivals, type CountedSpan } from '../../database/read-arrivals.ts';
import { readDriftCautions } from '../../database/read-drift.ts';
import { readAreas } from '../../database/read-site.ts';
import { readNewestWeekOutlook, type StoredWeekOutlook } from '../../database/read-week-outlook.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { Job } from '../../entities/Job.ts';
import type { Site } from '../../entities/Site.ts';
import { StaffedBedPlan } from '../../entities/StaffedBedPlan.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { weekOutlookJobKind } from './issue-week-outlook.job.ts';
import { readPastShifts } from './past-shifts.ts';
import { weekCautions } from './week-cautions.ts';
import { weekOutlookDue, whyNoWeekOutlook, type WeekTrigger } from './week-outlook-due.ts';

const hour = 3600;
const day = 86_400;
const pastDays = 8;

/** A week outlook as it leaves the server: exactly as issued. */
export async function presentWeekOutlook(
  read: EntityManager,
  { row, result }: StoredWeekOutlook,
): Promise<WeekOutlook> {
  const model = await read.findOneByOrFail(ArrivalModelRow, { id: row.modelId });
  return {
    id: row.id,
    issuedAt: row.issuedAt,
    trigger: row.trigger as WeekTrigger,
    planVersion: row.planVersion,
    model: {
      id: model.id,
      fittedAt: model.fittedAt ?? 0,
      trainedTo: model.trainedTo ?? 0,
      staysFrom: model.staysFrom,
      weeksOfHistory: ((model.trainedTo ?? 0) - (model.trainedFrom ?? 0)) / (7 * day),
    },
    seed: row.seed,
    softwareVersion: row.softwareVersion,
    computeMilliseconds: row.computeMilliseconds,
    result,
  };
}

/** Everything that the Week ahead page shows, as of now; nothing is computed anew. */
export async function presentWeekAhead(deps: Dependencies, site: Site, now: number): Promise<WeekAhead> {
  const { read } = deps.database;
  const asked = await read.existsBy(Job, {
    siteId: site.id,
    kind: weekOutlookJobKind,
    status: In(['queued', 'running']),
  });
  const computing = asked || (await weekOutlookDue(read, site, now)) !== null;
  const actual = await readArrivals(read, site, pastHours(site, now), now);
  const past = await readPastShifts(read, site, now);
  const stored = await readNewestWeekOutlook(read, site.id);
  const without = await whyNoWeekOutlook(read, site);
  if (!stored || without) {
    const missing = without ?? {
      reason: 'not computed yet' as const,
      next: 'The week ahead is being computed. It appears here by itself.',
    };
    return { now, outlook: null, computing, missing, cautions: [], plan: null, past, actual, lastWeek: null };
  }
  const outlook = await presentWeekOutlook(read, stored);
  const logs = await read.findBy(VisitLog, { siteId: site.id, status: 'ready' });
  const facts = logs.map((log) => ({ periodFrom: log.periodFrom, periodTo: log.periodTo, facts: log }));
  const plan = await read.findOneBy(StaffedBedPlan, { siteId: site.id, version: stored.row.planVersion });
  return {
    now,
    outlook,
    computing,
    missing: null,
    cautions: weekCautions({
      now,
      outlook,
      areas: await readAreas(read, site.id),
      covered: coveredSpans(facts, now, site.stayCapHours * hour),
      drift: await readDriftCautions(read, site.id),
    }),
    plan: plan && { version: plan.version, savedAt: plan.savedAt, savedBy: plan.savedBy },
    past,
    actual,
    lastWeek: await readLastWeek(read, site, now),
  };
}

/** The whole local hours of the last eight days. */
function pastHours(site: Site, now: number): { from: number; to: number }[] {
  const zone = makeZone(site.timeZone);
  const rest = ((zone.toLocal(now) % hour) + hour) % hour;
  const end = now - rest;
  return Array.from({ length: pastDays * 24 }, (_, index) => {
    const from = end - (pastDays * 24 - index) * hour;
    return { from, to: from + hour };
  });
}

/** The week outlook that stood a week ago, against what came; null where there is none of then, not even one made afterwards. */
async function readLastWeek(read: EntityManager, site: Site, now: number): Promise<LastWeek | null> {
  const then = await readNewestWeekOutlook(read, site.id, now - 7 * day, true);
  if (!then || then.row.issuedAt < now - 9 * day) return null;
  const { spans, total } = then.result.arrivals.days;
  const whole = spans.flatMap((span, index) => (index > 0 && index <= 7 ? [{ ...span, index }] : []));
  const counted: CountedSpan[] = await readArrivals(read, site, whole, now);
  return {
    outlookId: then.row.id,
    issuedAt: then.row.issuedAt,
    recomputed: then.row.trigger === 'recomputed',
    days: whole.map(({ name, from, to, index }, place) => ({
      date: name,
      from,
      to,
      p2_5: total.p2_5[index],
      p10: total.p10[index],
      p25: total.p25[index],
      p50: total.p50[index],
      p75: total.p75[index],
      p90: total.p90[index],
      p97_5: total.p97_5[index],
      count: counted[place].count,
    })),
  };
}
