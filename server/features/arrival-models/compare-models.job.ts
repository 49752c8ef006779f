import { MessageChannel } from 'node:worker_threads';
import { z } from 'zod';
import { id } from '../../../shared/api/common.ts';
import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import { readCalendar } from '../../database/read-calendar.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { ModelComparisonRow } from '../../entities/ModelComparisonRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, type JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { ComparedRow, CompareReply, CompareRequest } from './compare-request.ts';

export const compareJobKind = 'arrival-model.compare';
export const comparePayload = z.object({ comparisonId: id, weeks: z.int() });
const longestHistorySeconds = 12 * 366 * 86_400;
const aheadSeconds = 30 * 86_400;

/** Backtests a candidate beside the model in use on a thread, and stores what came of it. */
export function makeCompareKind(deps: Dependencies): JobKind {
  const { database, clock, pool } = deps;
  return {
    oneAtATime: true,
    async run({ payload, signal, progress }) {
      const { comparisonId, weeks } = comparePayload.parse(payload);
      const { read } = database;
      const row = await read.findOneByOrFail(ModelComparisonRow, { id: comparisonId });
      const site = await read.findOneByOrFail(Site, { id: row.siteId });
      const gaps = await read.findBy(ExposureGapRow, { siteId: site.id });
      const now = clock();
      const { port1, port2 } = new MessageChannel();
      port1.on('message', ({ share }: { share: number }) => {
        progress(share, 'Trying both on past weeks');
      });
      let reply: CompareReply;
      try {
        const request: CompareRequest = {
          databaseFile: database.file,
          siteId: site.id,
          timeZone: site.timeZone,
          candidate: await comparedRow(deps, row.candidateId),
          inUse: await comparedRow(deps, row.inUseId),
          calendar: await readCalendar(read, site, now - longestHistorySeconds, now + aheadSeconds),
          gaps: gaps.map((gap) => ({ areaId: gap.areaId, from: gap.fromAt, to: gap.untilAt })),
          stayCapHours: site.stayCapHours,
          weeks,
          seed: row.seed,
          now,
          progress: port2,
        };
        const worker = workerUrl(import.meta.url, 'compare.worker');
        reply = await pool.run<CompareReply>(worker, request, { signal, transferList: [port2] });
      } finally {
        port1.close();
      }
      if (reply.refused !== null) throw new PermanentJobError(reply.refused);
      const result = JSON.stringify(reply.result);
      const doneAt = clock();
      await database.write(async (manager) => {
        const stored = await manager.update(
          ModelComparisonRow,
          { id: comparisonId, status: 'running' },
          { status: 'done', doneAt, result },
        );
        if (stored.affected !== 1) return;
        await recordOwnAudit(manager, {
          at: doneAt,
          actor: 'comparison',
          siteId: site.id,
          event: 'arrival-model.compared',
          subject: row.candidateId,
          detail: { comparisonId, with: row.inUseId },
        });
      });
    },
    settle: async (manager, job, error) => {
      const { comparisonId } = comparePayload.parse(JSON.parse(job.payload));
      await manager.update(ModelComparisonRow, { id: comparisonId, status: 'running' }, { status: 'failed', error });
    },
  };
}

async function comparedRow(deps: Dependencies, modelId: string): Promise<ComparedRow> {
  const { lineage, trainedTo } = await deps.database.read.findOneByOrFail(ArrivalModelRow, { id: modelId });
  const logIds = (JSON.parse(lineage) as ModelDetail['lineage']).map(({ logId }) => logId);
  return { modelId, logIds, trainedTo: trainedTo ?? 0 };
}
