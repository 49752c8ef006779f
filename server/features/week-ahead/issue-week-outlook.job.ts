import { createHash } from 'node:crypto';
import { MessageChannel } from 'node:worker_threads';
import { In } from 'typeorm';
import { z } from 'zod';
import { id } from '../../../shared/api/common.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { newId } from '../../database/new-id.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { Site } from '../../entities/Site.ts';
import { WeekOutlookLawsRow } from '../../entities/WeekOutlookLawsRow.ts';
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { softwareVersion } from '../../software-version.ts';
import { buildWeekInput } from './build-week-input.ts';
import { standsOn } from './stands-on.ts';
import { lookBacksDue, type LookBack } from './look-backs-due.ts';
import { weekOutlookDue, type WeekTrigger } from './week-outlook-due.ts';
import type { WeekReply, WeekRequest } from './week-outlook.worker.ts';

export const weekOutlookJobKind = 'week-outlook.issue';
const payloadSchema = z.object({ siteId: id });
/** For one made afterwards: only its arrivals are shown. */
const lookBackReplications = 500;
/** After a job that failed for good, the next is asked for this much later, seconds. */
const restAfterFailure = 3600;

/**
 * Issues a site's week outlook, if one is due: computes it on a thread beside the fits and stores it. Where a site has not
 * issued any for a week, those of the days before the first are made from models that knew nothing later.
 */
export function makeWeekOutlookKind(deps: Dependencies, replications = 4000): JobKind {
  const { database, clock, pool } = deps;
  return {
    run: async ({ payload, signal, progress }) => {
      const { siteId } = payloadSchema.parse(payload);
      const { read } = database;
      const site = await read.findOneByOrFail(Site, { id: siteId });
      const now = clock();
      const trigger = await weekOutlookDue(read, site, now);
      const model = await readModelInUse(read, siteId);
      if (trigger !== null && model) {
        await issueAt({ at: now, modelId: model.id }, trigger, replications);
        return;
      }
      // One a job: what is due meanwhile does not wait for all of them.
      const [missing] = await lookBacksDue(read, site, now);
      if (missing) await issueAt(missing, 'recomputed', Math.min(replications, lookBackReplications));

      /** Computes one on a thread and stores it as issued at its time. */
      async function issueAt({ at, modelId }: LookBack, why: WeekTrigger, count: number): Promise<void> {
        const plan = await readPlan(read, siteId);
        const parameters = await readModelParameters(read, modelId);
        const stands = await standsOn(read, site, modelId, at);
        const input = await buildWeekInput(read, site, parameters.areaIds, at, count);
        if (!input || !plan) return;
        const startedAt = performance.now();
        const { port1, port2 } = new MessageChannel();
        port1.on('message', (message: { share: number; text: string }) => {
          progress(message.share, message.text);
        });
        let reply: WeekReply;
        try {
          const request: WeekRequest = { databaseFile: database.file, siteId, parameters, input, progress: port2 };
          const worker = workerUrl(import.meta.url, 'week-outlook.worker');
          reply = await pool.run<WeekReply>(worker, request, { signal, transferList: [port2] });
        } finally {
          port1.close();
        }
        const computeMilliseconds = performance.now() - startedAt;
        const weekOutlookId = newId();
        await database.write(async (manager) => {
          await manager.insert(WeekOutlookRow, {
            id: weekOutlookId,
            siteId,
            issuedAt: at,
            trigger: why,
            modelId,
            planVersion: plan.plan.version,
            seed: input.seed,
            replications: count,
            engineVersion,
            softwareVersion,
            computeMilliseconds,
            standsOn: stands,
            calendar: JSON.stringify(input.calendar),
            input: reply.input,
            result: reply.result,
            digest: createHash('sha256').update(reply.result).digest('hex'),
          });
          // One made afterwards is shown, marked as such, and not scored as issued.
          if (why === 'recomputed') return;
          await manager.insert(WeekOutlookLawsRow, { weekOutlookId, siteId, issuedAt: at, laws: reply.laws });
        });
      }
    },
  };
}

/**
 * Asks for a site's week outlook if one is due and none is asked for yet. A failure to look is reported, so that one site
 * does not keep the others from theirs. @returns true if a job was queued.
 */
export async function askForWeekOutlook(deps: Dependencies, site: Site): Promise<boolean> {
  try {
    const { read } = deps.database;
    const now = deps.clock();
    const due = (await weekOutlookDue(read, site, now)) !== null || (await lookBacksDue(read, site, now)).length > 0;
    return due && (await queueJob(deps, site.id));
  } catch (error) {
    deps.logger.error({ err: error, siteId: site.id }, 'the week ahead could not be asked for');
    return false;
  }
}

function queueJob(deps: Dependencies, siteId: string): Promise<boolean> {
  const kind = weekOutlookJobKind;
  return deps.database.write(async (manager) => {
    if (await manager.existsBy(Job, { siteId, kind, status: In(['queued', 'running']) })) return false;
    const last = await manager.findOne(Job, { where: { siteId, kind }, order: { createdAt: 'DESC' } });
    const restUntil = last?.status === 'failed' ? (last.endedAt ?? 0) + restAfterFailure : 0;
    if (deps.clock() < restUntil) return false;
    await deps.jobs.enqueue(manager, {
      kind,
      title: 'Compute the week ahead',
      siteId,
      payload: { siteId },
      createdBy: 'the timetable',
    });
    return true;
  });
}
