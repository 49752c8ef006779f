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
import { WeekOutlookRow } from '../../entities/WeekOutlookRow.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import { softwareVersion } from '../../software-version.ts';
import { buildWeekInput } from './build-week-input.ts';
import { standsOn } from './stands-on.ts';
import { weekOutlookDue } from './week-outlook-due.ts';
import type { WeekReply, WeekRequest } from './week-outlook.worker.ts';

export const weekOutlookJobKind = 'week-outlook.issue';
const payloadSchema = z.object({ siteId: id });
/** After a job that failed for good, the next is asked for this much later, seconds. */
const restAfterFailure = 3600;

/** Issues a site's week outlook, if one is due: computes it on a thread beside the fits and stores it. */
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
      const plan = await readPlan(read, siteId);
      if (trigger === null || !model || !plan) return;
      const parameters = await readModelParameters(read, model.id);
      const stands = await standsOn(read, site, model.id, now);
      const input = await buildWeekInput(read, site, parameters.areaIds, now, replications);
      if (!input) return;
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
      await database.write((manager) =>
        manager.insert(WeekOutlookRow, {
          id: newId(),
          siteId,
          issuedAt: now,
          trigger,
          modelId: model.id,
          planVersion: plan.plan.version,
          seed: input.seed,
          replications,
          engineVersion,
          softwareVersion,
          computeMilliseconds,
          standsOn: stands,
          calendar: JSON.stringify(input.calendar),
          input: reply.input,
          result: reply.result,
          digest: createHash('sha256').update(reply.result).digest('hex'),
        }),
      );
    },
  };
}

/**
 * Asks for a site's week outlook if one is due and none is asked for yet. A failure to look is reported, so that one site
 * does not keep the others from theirs. @returns true if a job was queued.
 */
export async function askForWeekOutlook(deps: Dependencies, site: Site): Promise<boolean> {
  try {
    const due = (await weekOutlookDue(deps.database.read, site, deps.clock())) !== null;
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
