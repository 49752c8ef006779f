import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { workerUrl, type SimulationPool } from '../../simulation/pool.ts';
import type { OutlookTask } from './outlook.worker.ts';

const worker = workerUrl(import.meta.url, 'outlook.worker');

/**
 * Computes an outlook on the pool's threads, each with an equal share of the replications. Every
 * replication has its own random streams, so the digits do not depend on how many threads there are.
 */
export async function computeOutlook(
  pool: SimulationPool,
  parameters: ModelParameters,
  input: OutlookInput,
): Promise<OutlookResult> {
  const shares = Math.min(pool.threads, input.replications);
  const bound = (share: number) => Math.floor((share * input.replications) / shares);
  const parts = await Promise.all(
    Array.from({ length: shares }, (_, share) => {
      const task: OutlookTask = { kind: 'part', parameters, input, from: bound(share), to: bound(share + 1) };
      return pool.run<NeedPart>(worker, task);
    }),
  );
  const finish: OutlookTask = { kind: 'finish', parameters, input, parts };
  return pool.run<OutlookResult>(worker, finish);
}
