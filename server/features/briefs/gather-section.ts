import { Between, type EntityManager } from 'typeorm';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { WeekOutlookResult } from '../../../shared/forecasting/week-outlook-types.ts';
import { readCalendar } from '../../database/read-calendar.ts';
import { readDriftCautions } from '../../database/read-drift.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import { readAreas } from '../../database/read-site.ts';
import { readNewestWeekOutlook } from '../../database/read-week-outlook.ts';
import { Acknowledgement } from '../../entities/Acknowledgement.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import type { Site } from '../../entities/Site.ts';
import { StaffedBedPlan } from '../../entities/StaffedBedPlan.ts';
import { StaffedBedPlanArea } from '../../entities/StaffedBedPlanArea.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { weeksAround } from './add-hindsight.ts';
import type { OutlookPart, SectionInput } from './brief-section.ts';
import { readLastWeekScores } from './read-scores.ts';

const day = 86_400;
/** A week outlook that was issued longer ago does not know today. */
const freshSeconds = 36 * 3600;

/** Gathers all that a site's section is written from, as of `now`. */
export async function gatherSection(read: EntityManager, site: Site, now: number): Promise<SectionInput> {
  const zone = makeZone(site.timeZone);
  const { nextWeek, lastWeek } = weeksAround(zone, now);
  const areas = await readAreas(read, site.id);
  const model = await readModelInUse(read, site.id);
  const parameters = model ? await readModelParameters(read, model.id) : null;
  const week = model ? await readNewestWeekOutlook(read, site.id, now) : null;
  const outlook =
    week && week.row.issuedAt > now - freshSeconds ? partOf(week.row.issuedAt, week.result, nextWeek) : null;
  const calendar = await readCalendar(read, site, nextWeek.from, nextWeek.to - 1);
  const place = (areaId: string) => areas.findIndex(({ id }) => id === areaId);
  const planRows = await read.find(StaffedBedPlan, { where: { siteId: site.id }, order: { version: 'ASC' } });
  const planAreas = await read
    .createQueryBuilder(StaffedBedPlanArea, 'area')
    .where('area.planId IN (SELECT id FROM staffed_bed_plan WHERE siteId = :siteId)', { siteId: site.id })
    .getMany();
  const yearAgo = lastWeek.from - 53 * 7 * day;
  const changes = await read
    .createQueryBuilder(BedChange, 'change')
    .where('change.siteId = :siteId AND change.untilAt > :yearAgo', { siteId: site.id, yearAgo })
    .orderBy("change.kind = 'change now'", 'ASC')
    .addOrderBy('change.madeAt', 'ASC')
    .getMany();
  const gaps = await read
    .createQueryBuilder(ExposureGapRow, 'gap')
    .where('gap.siteId = :siteId AND gap.untilAt > :from AND gap.fromAt < :to', { siteId: site.id, ...lastWeek })
    .getMany();
  const inLastWeek = Between(lastWeek.from, now);
  const forArrivals =
    !outlook && parameters && parameters.areaIds.length === areas.length
      ? { model: parameters.arrival, calendar: parameters.calendar, seed: now % 2 ** 31 }
      : null;
  return {
    site: {
      id: site.id,
      name: site.name,
      timeZone: site.timeZone,
      planningRisk: site.planningRisk,
      smallNumberMinimum: site.smallNumberMinimum,
      stayCapHours: site.stayCapHours,
      waitLimitMinutes: site.waitLimitMinutes,
    },
    areas: areas.map(({ id, name, spaceKind }) => ({ id, name, spaceKind })),
    nextWeek,
    lastWeek,
    refusal: model ? null : 'No arrival model is in use at this site: one must be fitted and approved first.',
    model:
      model && parameters
        ? {
            fittedAt: model.fittedAt,
            areaIds: parameters.areaIds,
            drift: await readDriftCautions(read, site.id),
          }
        : null,
    outlook,
    arrival: forArrivals,
    calendar,
    plans: planRows.map(({ id, savedAt }) => ({
      savedAt,
      halfHours: areas.map(
        (area) => planAreas.find(({ planId, areaId }) => planId === id && areaId === area.id)?.halfHours ?? [],
      ),
    })),
    bedChanges: changes.map(({ areaId, fromAt, untilAt, beds }) => ({ area: place(areaId), fromAt, untilAt, beds })),
    gaps: gaps.map(({ areaId, fromAt, untilAt, reason }) => ({
      area: areaId === null ? null : place(areaId),
      from: fromAt,
      to: untilAt,
      reason,
    })),
    done: {
      acknowledged: await read.countBy(Acknowledgement, { siteId: site.id, at: inLastWeek }),
      bedChanges: await read.countBy(BedChange, { siteId: site.id, kind: 'change now', madeAt: inLastWeek }),
    },
    changes: await readChanges(read, site, lastWeek.from, now),
    scores: await readLastWeekScores(read, site.id, lastWeek),
  };
}

/** What a week outlook says of the seven days from tomorrow. */
function partOf(
  issuedAt: number,
  { arrivals, areas, shifts, days }: WeekOutlookResult,
  next: { from: number; to: number },
): OutlookPart | null {
  const week = arrivals.weeks.spans.findIndex(({ from, to }) => from === next.from && to === next.to);
  if (week < 0) return null;
  const fan = (columns: typeof arrivals.days.total, index: number) => ({
    p2_5: columns.p2_5[index],
    p10: columns.p10[index],
    p25: columns.p25[index],
    p50: columns.p50[index],
    p75: columns.p75[index],
    p90: columns.p90[index],
    p97_5: columns.p97_5[index],
  });
  return {
    issuedAt,
    week: fan(arrivals.weeks.total, week),
    days: days.flatMap(({ from }, index) =>
      from >= next.from && from < next.to ? [{ from, ...fan(arrivals.days.total, index) }] : [],
    ),
    shifts: areas.flatMap((area) =>
      shifts.flatMap(({ name, from }, index) => {
        if (from < next.from || from >= next.to) return [];
        const own = area.shifts[index];
        return [
          {
            shift: name,
            from,
            areaId: area.areaId,
            counted: area.counted,
            chance: own.someTime,
            staffed: own.staffedLeast,
            bedsNeeded: own.bedsForPlanningRisk,
            bedsToAdd: own.bedsToAdd,
            bedsThatDoNotExist: own.bedsThatDoNotExist,
            nurseHours: own.nurseHours,
            lastChanceAt: own.lastChanceAt,
          },
        ];
      }),
    ),
  };
}

/** What changed of the model, the plan and the data, one sentence each. */
async function readChanges(read: EntityManager, site: Site, from: number, to: number): Promise<string[]> {
  const siteId = site.id;
  const span = Between(from, to);
  const approved = await read.find(ArrivalModelRow, {
    where: { siteId, approvedAt: span },
    order: { approvedAt: 'ASC' },
  });
  const refreshed = await read.countBy(ArrivalModelRow, { siteId, refreshedAt: span });
  const plans = await read.find(StaffedBedPlan, { where: { siteId, savedAt: span }, order: { version: 'ASC' } });
  const loaded = await read.find(VisitLog, { where: { siteId, status: 'ready', readyAt: span } });
  const withdrawn = await read.countBy(VisitLog, { siteId, withdrawnAt: span });
  const counted = (count: number, one: string) => `${String(count)} ${one}${count === 1 ? '' : 's'}`;
  const structures = approved.filter(({ refreshedFromId }) => refreshedFromId === null);
  return [
    ...structures.map(({ approvedBy }) => `An arrival model was approved by ${approvedBy ?? 'somebody'}.`),
    ...(refreshed > 0
      ? [`The level of the model moved on with new visits ${refreshed === 1 ? 'once' : `${String(refreshed)} times`}.`]
      : []),
    ...plans.map(
      ({ version, savedBy }) => `Version ${String(version)} of the staffed-bed plan was saved by ${savedBy}.`,
    ),
    ...(loaded.length > 0
      ? [`${counted(loaded.length, 'visit log')} ${loaded.length === 1 ? 'was' : 'were'} loaded.`]
      : []),
    ...(withdrawn > 0 ? [`${counted(withdrawn, 'visit log')} ${withdrawn === 1 ? 'was' : 'were'} withdrawn.`] : []),
  ];
}
