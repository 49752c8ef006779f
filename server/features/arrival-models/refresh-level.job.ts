import { z } from 'zod';
import { id } from '../../../shared/api/common.ts';
import { newId } from '../../database/new-id.ts';
import { readModelInUse, readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { EntityManager } from 'typeorm';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { RefreshRequest } from './refresh.worker.ts';

const payloadSchema = z.object({ siteId: id });

/**
 * Works the level of the model in use out anew: from the model as it was fitted, on by every arrival since then that still
 * counts. So a log that was withdrawn, or an outage that was declared, leaves no trace in the level. Structure, profile and
 * stays stay as approved; issued outlooks keep the parameters that they were computed with, so the moved model is a row
 * of its own.
 */
export function makeRefreshKind(deps: Dependencies, onRefreshed: (siteId: string) => Promise<void>): JobKind {
  const { database, clock, pool } = deps;
  return {
    retryable: true,
    run: async ({ payload, signal }) => {
      const { siteId } = payloadSchema.parse(payload);
      const model = await readModelInUse(database.read, siteId);
      if (!model || model.trainedTo === null) return;
      const site = await database.read.findOneByOrFail(Site, { id: siteId });
      const parameters = await readModelParameters(database.read, model.id);
      const base = await baseOf(database.read, model, clock() - site.visitRetentionDays * 86_400);
      const { arrival } = await readModelParameters(database.read, base.id);
      const gaps = await database.read.findBy(ExposureGapRow, { siteId });
      const request: RefreshRequest = {
        databaseFile: database.file,
        siteId,
        timeZone: site.timeZone,
        stayCapHours: site.stayCapHours,
        gaps: gaps.map((gap) => ({ areaId: gap.areaId, from: gap.fromAt, to: gap.untilAt })),
        areaIds: parameters.areaIds,
        arrival,
        trainedTo: base.trainedTo ?? model.trainedTo,
        now: clock(),
      };
      const moved = await pool.run<{ arrival: typeof parameters.arrival; trainedTo: number } | null>(
        workerUrl(import.meta.url, 'refresh.worker'),
        request,
        { signal },
      );
      if (!moved || JSON.stringify(moved.arrival) === JSON.stringify(parameters.arrival)) return;
      const now = clock();
      const movedId = newId();
      const replaced = await database.write(async (manager) => {
        const retired = await manager.update(
          ArrivalModelRow,
          { id: model.id, status: 'in use' },
          { status: 'retired', retiredAt: now },
        );
        if (retired.affected !== 1) return false;
        const { detail } = await manager.findOneOrFail(ArrivalModelRow, {
          where: { id: model.id },
          select: { id: true, detail: true },
        });
        await manager.insert(ArrivalModelRow, {
          ...model,
          id: movedId,
          status: 'in use',
          trainedTo: moved.trainedTo,
          refreshedFromId: model.id,
          refreshedAt: now,
          parameters: JSON.stringify({ ...parameters, arrival: moved.arrival }),
          detail,
        });
        await recordOwnAudit(manager, {
          at: now,
          actor: 'level refresh',
          siteId,
          event: 'arrival-model.level-moved',
          subject: movedId,
          detail: { from: model.id, trainedTo: moved.trainedTo },
        });
        return true;
      });
      if (replaced) await onRefreshed(siteId);
    },
  };
}

/**
 * The model that a level is worked out from: the one that was fitted. Where arrivals since then were deleted after the
 * retention time, the level that they led to is all that is left of them, and it is moved on from there.
 * @param keptFrom arrivals before it are deleted, UTC seconds
 */
async function baseOf(read: EntityManager, model: ArrivalModelRow, keptFrom: number): Promise<ArrivalModelRow> {
  let base = model;
  while (base.refreshedFromId !== null) {
    const before = await read.findOneBy(ArrivalModelRow, { id: base.refreshedFromId });
    if (!before || (before.trainedTo ?? 0) < keptFrom) return base;
    base = before;
  }
  return base;
}
