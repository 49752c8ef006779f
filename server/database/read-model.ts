import type { EntityManager } from 'typeorm';
import type { ArrivalModel } from '../../shared/forecasting/arrival-model.ts';
import type { StayModel } from '../../shared/forecasting/stay-model.ts';
import type { CalendarDay } from '../../shared/forecasting/visit-table.ts';
import { ArrivalModelRow } from '../entities/ArrivalModelRow.ts';

/** What a fit stores as parameters: everything that an outlook needs of the model. */
export interface ModelParameters {
  /** Area ids in the order that the model's area indices mean. */
  areaIds: string[];
  arrival: ArrivalModel;
  stay: StayModel;
  /** Unusual days known when it was fitted, past and a year ahead. */
  calendar: CalendarDay[];
}

const cache = new Map<string, ModelParameters>();
const cachedModels = 32;

/** The model in use at a site; null where none is. */
export function readModelInUse(read: EntityManager, siteId: string): Promise<ArrivalModelRow | null> {
  return read.findOne(ArrivalModelRow, { where: { siteId, status: 'in use' }, order: { approvedAt: 'DESC' } });
}

/** The parameters of a fitted model; they never change, so the last few read are kept. */
export async function readModelParameters(read: EntityManager, modelId: string): Promise<ModelParameters> {
  const kept = cache.get(modelId);
  if (kept) return kept;
  const row = await read.findOneOrFail(ArrivalModelRow, {
    where: { id: modelId },
    select: { id: true, parameters: true },
  });
  if (row.parameters === null) throw new Error(`model ${modelId} has no parameters`);
  const parameters = JSON.parse(row.parameters) as ModelParameters;
  if (cache.size >= cachedModels) cache.delete(cache.keys().next().value ?? '');
  cache.set(modelId, parameters);
  return parameters;
}
