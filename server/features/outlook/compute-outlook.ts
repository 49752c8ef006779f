import { serialize } from 'node:v8';
import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { workerUrl, type SimulationPool } from '../../simulation/pool.ts';
import type { FinishedOutlook, OutlookTask, SharedModel } from './outlook.worker.ts';

const worker = workerUrl(import.meta.url, 'outlook.worker');

const sharedModels = new WeakMap<ModelParameters, SharedModel>();
let models = 0;
let outlooks = 0;

/** The parameters in memory that all threads see; made once a model. */
function share(parameters: ModelParameters): SharedModel {
  const known = sharedModels.get(parameters);
  if (known) return known;
  const plain = serialize(parameters);
  const bytes = new SharedArrayBuffer(plain.length);
  new Uint8Array(bytes).set(plain);
  models += 1;
  const shared = { key: models, bytes };
  sharedModels.set(parameters, shared);
  return shared;
}

/**
 * Computes an outlook on the pool's threads, each with an equal share of the replications. Every
 * replication has its own random streams, so the digits do not depend on how many threads there are.
 */
export async function computeOutlook(
  pool: SimulationPool,
  parameters: ModelParameters,
  input: OutlookInput,
): Promise<OutlookResult> {
  return (await computeOutlookWithLaws(pool, parameters, input)).result;
}

/** The same, with the distributions behind it that the track record will score. */
export async function computeOutlookWithLaws(
  pool: SimulationPool,
  parameters: ModelParameters,
  input: OutlookInput,
): Promise<FinishedOutlook> {
  outlooks += 1;
  const common = { outlook: outlooks, model: share(parameters), input };
  const shares = Math.min(pool.threads, input.replications);
  const bound = (share: number) => Math.floor((share * input.replications) / shares);
  const parts = await Promise.all(
    Array.from({ length: shares }, (_, share) =>
      pool.run<NeedPart>(worker, {
        ...common,
        kind: 'part',
        from: bound(share),
        to: bound(share + 1),
      } satisfies OutlookTask),
    ),
  );
  return pool.run<FinishedOutlook>(worker, { ...common, kind: 'finish', parts } satisfies OutlookTask);
}
