import { setTimeout as pause } from 'node:timers/promises';
import type { EntityManager } from 'typeorm';
import { z } from 'zod';
import { id, instant } from '../../../shared/api/common.ts';
import { instantOfLocal, type ShiftPattern } from '../../../shared/domain/shift-times.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { newId } from '../../database/new-id.ts';
import { readCalendar } from '../../database/read-calendar.ts';
import { fullHoursAfter, readNeedInput } from '../../database/read-need-input.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { OutlookLawsRow } from '../../entities/OutlookLawsRow.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';
import { Site } from '../../entities/Site.ts';
import { WeekOutlookLawsRow } from '../../entities/WeekOutlookLawsRow.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, type JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { softwareVersion } from '../../software-version.ts';
import type { RecomputedModel, RecomputedWeek, RecomputeSite, RecomputeTask } from './recompute-request.ts';
import { scoreOutlooks } from './score-outlooks.job.ts';

export const recomputeJobKind = 'track-record.recompute';
export const recomputePayload = z.object({ siteId: id, from: instant, to: instant });
const worker = workerUrl(import.meta.url, 'recompute.worker');

const day = 86_400;
const week = 7 * day;
/** A recomputed outlook has fewer replications than one of tonight, and says so. */
const replications = 500;
const weekReplications = 300;
const weekArrivalDraws = 400;
/** The week ahead is recomputed for the newest weeks alone: each takes a quarter of a megabyte. */
const weeksOfWeekAhead = 13;
/** The local time at which the week ahead is issued each day. */
const dailyAtSeconds = 5 * 3600;
const weeksPerFit = 13;
const weeksPerScore = 4;
const outlookHours = 36;
const longestHistory = 12 * 366 * day;

/** Gathers what a week outlook is computed from, as of an instant; null without a staffed-bed plan for every area. */
type GatherWeekInput = (
  read: EntityManager,
  site: Site,
  areaIds: readonly string[],
  at: number,
  replications: number,
) => Promise<Omit<WeekOutlookInput, 'ambulance'> | null>;

/**
 * Recomputes the record of past weeks: before every quarter the model is fitted anew, every Monday its level is moved on, and an
 * hour before each shift an outlook is issued, and of the newest 13 weeks the week ahead each day at 05:00; all by the product's own code from the visits of before, the counts that the log
 * shows at that moment, and today's plan, areas and limits. Each outlook is stored with its inputs like any other. It stands
 * back behind everything else, goes on after a restart where it was, and is scored as it goes.
 * @param isBusy true while somebody's outlook is being computed
 * @param weekInput gathers what a week outlook is computed from
 */
export function makeRecomputeKind(deps: Dependencies, isBusy: () => boolean, weekInput: GatherWeekInput): JobKind {
  return {
    oneAtATime: true,
    async run({ job, payload, signal, progress }) {
      const { siteId, from, to } = recomputePayload.parse(payload);
      const record = await openRecord(deps, siteId, job.id, weekInput);
      const { zone } = record;
      const mondays: number[] = [];
      for (let at = mondayAfter(zone, from); at < to; at = mondayAfter(zone, at)) mondays.push(at);
      let scoredTo = mondays.at(0) ?? to;
      for (const [index, monday] of mondays.entries()) {
        const until = Math.min(mondays.at(index + 1) ?? to, to);
        if (!(await record.isDone(monday, until))) {
          await standBack(isBusy, signal);
          const said = `Week ${String(index + 1)} of ${String(mondays.length)}`;
          progress(index / mondays.length, said);
          const modelId = await record.modelFor(monday, index % weeksPerFit === 0, signal);
          await standBack(isBusy, signal);
          await record.issueWeek(modelId, monday, until, index >= mondays.length - weeksOfWeekAhead, signal);
        }
        if ((index + 1) % weeksPerScore === 0 || index === mondays.length - 1) {
          await scoreOutlooks(deps, siteId, scoredTo, until, signal, () => undefined);
          scoredTo = until;
        }
      }
      await deps.database.write((manager) =>
        recordOwnAudit(manager, {
          at: deps.clock(),
          actor: job.createdBy,
          siteId,
          event: 'track-record.recomputed',
          subject: job.id,
          detail: { from, to, weeks: mondays.length },
        }),
      );
    },
  };
}

/** Waits while somebody's outlook is computed: background work must not make a nurse wait. */
async function standBack(isBusy: () => boolean, signal: AbortSignal): Promise<void> {
  do await pause(50, undefined, { signal });
  while (isBusy());
}

/** The first local Monday 00:00 after an instant. */
function mondayAfter(zone: Zone, at: number): number {
  const localDay = Math.floor(zone.toLocal(at) / day);
  const weekday = (((localDay + 3) % 7) + 7) % 7;
  return instantOfLocal(zone, (localDay + 7 - weekday) * day);
}

/** An hour before each shift in [from, to), ascending. */
export function timesOfOutlooks(zone: Zone, shifts: readonly ShiftPattern[], from: number, to: number): number[] {
  const times = new Set<number>();
  const first = Math.floor(zone.toLocal(from) / day);
  for (let at = first - 1; at * day <= zone.toLocal(to) + day; at += 1) {
    for (const { startMinute } of shifts) {
      const issuedAt = instantOfLocal(zone, at * day + startMinute * 60) - 3600;
      if (issuedAt >= from && issuedAt < to) times.add(issuedAt);
    }
  }
  return [...times].sort((a, b) => a - b);
}

/** Every day's local time of the week ahead in [from, to), ascending. */
function dailyTimes(zone: Zone, from: number, to: number): number[] {
  const first = Math.floor(zone.toLocal(from) / day);
  const days = Math.ceil((to - from) / day) + 1;
  return Array.from({ length: days }, (_, i) => instantOfLocal(zone, (first + i) * day + dailyAtSeconds)).filter(
    (at) => at >= from && at < to,
  );
}

async function openRecord(deps: Dependencies, siteId: string, jobId: string, weekInput: GatherWeekInput) {
  const { database, clock, pool } = deps;
  const { read } = database;
  const site = await read.findOneByOrFail(Site, { id: siteId });
  const zone = makeZone(site.timeZone);
  const shifts = await readShifts(read, siteId);
  const areaIds = (await readAreas(read, siteId)).map((area) => area.id);
  const gaps = await read.findBy(ExposureGapRow, { siteId });
  const planVersion = (await readPlan(read, siteId))?.plan.version ?? 0;
  const common = (): RecomputeSite => ({
    databaseFile: database.file,
    siteId,
    timeZone: site.timeZone,
    stayCapHours: site.stayCapHours,
    gaps: gaps.map((gap) => ({ areaId: gap.areaId, from: gap.fromAt, to: gap.untilAt })),
    now: clock(),
  });
  const newestModel = (): Promise<ArrivalModelRow | null> =>
    read.findOne(ArrivalModelRow, { where: { siteId, jobId }, order: { trainedTo: 'DESC', createdAt: 'DESC' } });

  function modelRow(model: RecomputedModel, refreshedFromId: string | null, at: number): Partial<ArrivalModelRow> {
    return {
      id: newId(),
      siteId,
      jobId,
      status: 'retired',
      createdAt: clock(),
      fittedByPersonId: '',
      fittedBy: 'Recomputed record',
      fittedAt: at,
      retiredAt: clock(),
      reason: 'Fitted for the recomputed track record, on what was known at its time; never in use.',
      refreshedFromId,
      refreshedAt: refreshedFromId === null ? null : at,
      engineVersion,
      ...model,
    };
  }

  return {
    zone,
    async isDone(from: number, to: number): Promise<boolean> {
      const last = timesOfOutlooks(zone, shifts, from, to).at(-1);
      return last === undefined || (await read.existsBy(OutlookRow, { siteId, trigger: 'recomputed', issuedAt: last }));
    },
    /** The newest model of this job, or a new fit on what was known at an instant. */
    async modelFor(at: number, anew: boolean, signal: AbortSignal): Promise<string> {
      const known = await newestModel();
      if (known && (!anew || (known.trainedTo ?? 0) >= at - 3600)) return known.id;
      const calendar = await readCalendar(read, site, at - longestHistory, at + 366 * day);
      const task: RecomputeTask = { ...common(), kind: 'fit', until: at, calendar };
      const fitted = await runOrRefuse(() => pool.run<RecomputedModel>(worker, task, { signal }));
      const row = modelRow(fitted, null, at);
      await database.write((manager) => manager.insert(ArrivalModelRow, row));
      return row.id ?? '';
    },
    async issueWeek(modelId: string, from: number, to: number, withWeek: boolean, signal: AbortSignal): Promise<void> {
      const inputs: OutlookInput[] = [];
      for (const at of timesOfOutlooks(zone, shifts, from, to)) {
        // What a stop left of the week stays as it was issued.
        if (await read.existsBy(OutlookRow, { siteId, trigger: 'recomputed', issuedAt: at })) continue;
        const input = await readNeedInput(
          read,
          site,
          areaIds,
          at,
          fullHoursAfter(zone, at, outlookHours),
          replications,
        );
        if (!input) throw new PermanentJobError('No staffed-bed plan names every care area. Have one saved first.');
        // A seed of its time, so that a week computed again after a restart has the same digits.
        inputs.push({ ...input, seed: at % 2 ** 31 });
      }
      const weekInputs: WeekOutlookInput[] = [];
      for (const at of withWeek ? dailyTimes(zone, from, to) : []) {
        if (await read.existsBy(WeekOutlookRow, { siteId, trigger: 'recomputed', issuedAt: at })) continue;
        const input = await weekInput(read, site, areaIds, at, weekReplications);
        if (input) weekInputs.push({ ...input, ambulance: null, arrivalDraws: weekArrivalDraws, seed: at % 2 ** 31 });
      }
      const task: RecomputeTask = { ...common(), kind: 'week', modelId, until: from, inputs, weekInputs };
      const issued = await runOrRefuse(() => pool.run<RecomputedWeek>(worker, task, { signal }));
      const row = modelRow(issued.model, modelId, from);
      await database.write((manager) => manager.insert(ArrivalModelRow, row));
      // First, because a week counts as done once its last outlook of tonight is stored.
      for (const outlook of issued.weekOutlooks) {
        signal.throwIfAborted();
        await database.write(async (manager) => {
          const { laws, ...stored } = outlook;
          const weekOutlookId = newId();
          await manager.insert(WeekOutlookRow, {
            ...stored,
            id: weekOutlookId,
            siteId,
            trigger: 'recomputed',
            modelId: row.id ?? '',
            planVersion,
            engineVersion,
            softwareVersion,
            standsOn: '',
          });
          await manager.insert(WeekOutlookLawsRow, { weekOutlookId, siteId, issuedAt: outlook.issuedAt, laws });
        });
      }
      for (const outlook of issued.outlooks) {
        signal.throwIfAborted();
        await database.write(async (manager) => {
          const { laws, ...stored } = outlook;
          const outlookId = newId();
          await manager.insert(OutlookRow, {
            ...stored,
            id: outlookId,
            siteId,
            trigger: 'recomputed',
            modelId: row.id ?? '',
            engineVersion,
            softwareVersion,
          });
          await manager.insert(OutlookLawsRow, { outlookId, siteId, issuedAt: outlook.issuedAt, laws });
        });
      }
    },
  };
}

/** A refusal of the engine (too little history, say) cannot be mended by trying again. */
async function runOrRefuse<Result>(run: () => Promise<Result>): Promise<Result> {
  try {
    return await run();
  } catch (error) {
    if (error instanceof RangeError)
      throw new PermanentJobError(`The record could not be recomputed: ${error.message}.`);
    throw error;
  }
}

/** The instant from which a year, or fewer weeks, before `now` can be recomputed: half a year of log must lie before it. */
export function recomputeFrom(logFrom: number, now: number, weeks: number): number {
  return Math.max(now - weeks * week, logFrom + 26 * week);
}
