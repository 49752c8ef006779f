import type { EntityManager } from 'typeorm';
import type { ModelDetail, ModelSummary } from '../../../shared/api/arrival-models.ts';
import type { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../entities/ExposureGapRow.ts';
import { VisitLog } from '../../entities/VisitLog.ts';

/** What has changed about the visits of each model since it was fitted: logs withdrawn, outages and diversions declared in its time. */
export async function sinceFit(
  read: EntityManager,
  siteId: string,
  models: readonly ArrivalModelRow[],
): Promise<Map<string, ModelSummary['sinceFit']>> {
  const withdrawn = await read.find(VisitLog, {
    where: { siteId, status: 'withdrawn' },
    select: { id: true, fileName: true },
  });
  const nameOf = new Map(withdrawn.map(({ id, fileName }) => [id, fileName]));
  const gaps = await read.findBy(ExposureGapRow, { siteId });
  return new Map(
    models.map(({ id, lineage, fittedAt, trainedFrom, trainedTo }) => [
      id,
      {
        withdrawnLogs: (JSON.parse(lineage) as ModelDetail['lineage']).flatMap(({ logId }) => nameOf.get(logId) ?? []),
        gapsDeclared:
          fittedAt === null || trainedFrom === null || trainedTo === null
            ? 0
            : gaps.filter(
                ({ declaredAt, fromAt, untilAt }) =>
                  declaredAt !== null && declaredAt > fittedAt && fromAt < trainedTo && untilAt > trainedFrom,
              ).length,
      },
    ]),
  );
}
