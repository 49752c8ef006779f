import { MessageChannel } from 'node:worker_threads';
import { z } from 'zod';
import { id } from '../../../shared/api/common.ts';
import { readCalendar } from '../../database/read-calendar.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, type JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { FitReply, FitRequest } from './fit-input.ts';

export const fitJobKind = 'arrival-model.fit';
const payloadSchema = z.object({ modelId: id, logIds: z.array(id).optional() });
const calendarYearsAhead = 1;
const longestHistorySeconds = 12 * 366 * 86_400;

/** Fits the candidate of a job on a thread and stores it. A refusal (too little history…) fails the model with its reason. */
export function makeFitKind(deps: Dependencies): JobKind {
  const { database, clock, pool } = deps;
  const run: JobKind['run'] = async ({ payload, signal, progress }) => {
    const { modelId, logIds = null } = payloadSchema.parse(payload);
    const model = await database.read.findOneByOrFail(ArrivalModelRow, { id: modelId });
    const site = await database.read.findOneByOrFail(Site, { id: model.siteId });
    const now = clock();
    const areas = await readAreas(database.read, site.id);
    const gaps = await database.read.findBy(ExposureGapRow, { siteId: site.id });
    const { port1, port2 } = new MessageChannel();
    port1.on('message', (message: { share: number; text: string }) => {
      progress(message.share, message.text);
    });
    let reply: FitReply;
    try {
      const request: FitRequest = {
        databaseFile: database.file,
        siteId: site.id,
        logIds,
        timeZone: site.timeZone,
        areaNames: Object.fromEntries(areas.map((area) => [area.id, area.name])),
        calendar: await readCalendar(
          database.read,
          site,
          now - longestHistorySeconds,
          now + calendarYearsAhead * 366 * 86_400,
        ),
        gaps: gaps.map((gap) => ({ areaId: gap.areaId, from: gap.fromAt, to: gap.untilAt })),
        stayCapHours: site.stayCapHours,
        now,
        progress: port2,
      };
      reply = await pool.run(workerUrl(import.meta.url, 'fit.worker'), request, { signal, transferList: [port2] });
    } finally {
      port1.close();
    }
    if (reply.refused !== null) throw new PermanentJobError(reply.refused);
    const fitted = reply;
    const fittedAt = clock();
    await database.write(async (manager) => {
      const stored = await manager.update(
        ArrivalModelRow,
        { id: modelId, status: 'fitting' },
        {
          status: 'candidate',
          fittedAt,
          trainedFrom: fitted.trainedFrom,
          trainedTo: fitted.trainedTo,
          visits: fitted.visits,
          staysFrom: fitted.staysFrom,
          lineage: JSON.stringify(
            fitted.lineage.map(({ logId, fileName, sha256, rows }) => ({ logId, fileName, sha256, rows })),
          ),
          parameters: JSON.stringify(fitted.parameters),
          detail: JSON.stringify(fitted.detail),
        },
      );
      if (stored.affected === 1) {
        await recordOwnAudit(manager, {
          at: fittedAt,
          actor: 'fit',
          siteId: site.id,
          event: 'arrival-model.fitted',
          subject: modelId,
          detail: { visits: fitted.visits, logs: fitted.lineage.length },
        });
      }
    });
  };
  return {
    run,
    settle: async (manager, job, error) => {
      const { modelId } = payloadSchema.parse(JSON.parse(job.payload));
      await manager.update(ArrivalModelRow, { id: modelId, status: 'fitting' }, { status: 'failed', error });
    },
  };
}
