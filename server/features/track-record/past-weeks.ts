import type { EntityManager } from 'typeorm';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
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
import { PermanentJobError } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { softwareVersion } from '../../software-version.ts';
import type { RecomputedModel, RecomputedWeek, RecomputeSite, RecomputeTask } from './recompute-request.ts';
import { dailyTimes, timesOfOutlooks } from './recompute-times.ts';

const worker = workerUrl(import.meta.url, 'recompute.worker');
const day = 86_400;
/** A recomputed outlook has fewer replications than one of tonight, and says so. */
const replications = 500;
const weekReplications = 300;
const weekArrivalDraws = 400;
const outlookHours = 36;
const longestHistory = 12 * 366 * day;

/** Gathers what a week outlook is computed from, as of an instant; null without a staffed-bed plan for every area. */
export type GatherWeekInput = (
  read: EntityManager,
  site: Site,
  areaIds: readonly string[],
  at: number,
  replications: number,
) => Promise<Omit<WeekOutlookInput, 'ambulance'> | null>;

/** A site's past weeks, for one job: whether one is done, the model for it, and its outlooks issued and stored. */
export async function openPastWeeks(deps: Dependencies, siteId: string, jobId: string, weekInput: GatherWeekInput) {
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
