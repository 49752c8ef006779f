import type { EntityManager } from 'typeorm';
import type { ModelDetail, ModelSummary } from '../../../shared/api/arrival-models.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import type { Caller } from '../../http/caller.ts';
import type { FittedDetail } from './fit-input.ts';

/** A model as lists show it. @param changed what has changed about its visits since it was fitted; see since-fit */
export function presentModel(row: ArrivalModelRow, caller: Caller, changed: ModelSummary['sinceFit']): ModelSummary {
  const { trainedFrom, trainedTo } = row;
  return {
    id: row.id,
    status: row.status,
    fittedAt: row.fittedAt,
    fittedBy: row.fittedBy,
    approvedAt: row.approvedAt,
    approvedBy: row.approvedBy,
    retiredAt: row.retiredAt,
    reason: row.reason,
    trainedFrom,
    trainedTo,
    visits: row.visits,
    staysFrom: row.staysFrom,
    weeksOfHistory: trainedFrom !== null && trainedTo !== null ? (trainedTo - trainedFrom) / (7 * 86_400) : 0,
    refreshedAt: row.refreshedAt,
    error: row.error,
    jobId: row.jobId,
    fittedByCaller: row.fittedByPersonId === caller.person.id,
    sinceFit: changed,
  };
}

/** A model's page; what the fit made is empty until it is fitted. */
export async function presentModelDetail(
  read: EntityManager,
  row: ArrivalModelRow,
  caller: Caller,
  changed: ModelSummary['sinceFit'],
): Promise<ModelDetail> {
  const { detail } = await read.findOneOrFail(ArrivalModelRow, {
    where: { id: row.id },
    select: { id: true, detail: true },
  });
  const fitted: FittedDetail =
    detail === null
      ? {
          settings: {},
          areas: [],
          streams: [],
          departureBlocks: [],
          variation: { sharedDayCv: 0, dayCorrelation: 0, outflowCv: 0, outflowCorrelation: 0, structure: '' },
          findings: [],
        }
      : (JSON.parse(detail) as FittedDetail);
  return {
    ...presentModel(row, caller, changed),
    engineVersion: row.engineVersion,
    lineage: JSON.parse(row.lineage) as ModelDetail['lineage'],
    ...fitted,
  };
}
