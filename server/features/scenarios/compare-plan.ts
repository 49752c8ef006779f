import { createHash } from 'node:crypto';
import type { ComparedPart } from '../../../shared/forecasting/compare-need.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import type { PlanChange } from '../../../shared/domain/plan-change.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { workerUrl, type SimulationPool } from '../../simulation/pool.ts';
import { shareValue } from '../../simulation/share-value.ts';
import type { WhatIfTask } from './what-if.worker.ts';

const worker = workerUrl(import.meta.url, 'what-if.worker');

/** Replications of a task: few enough that progress moves and a cancel is heard within a second. */
const chunk = 500;
let comparisons = 0;

/** The exact method's inputs as JSON, made on a thread. */
export function prepareOnThread(
  pool: SimulationPool,
  parameters: ModelParameters,
  input: OutlookInput,
): Promise<string> {
  return pool.run<string>(worker, { kind: 'exact', model: shareValue(parameters), input } satisfies WhatIfTask);
}

/**
 * Compares a plan with as is on the pool's threads: each replication once without and once with the changes, on the same
 * random numbers. The cuts do not depend on the number of threads, so neither do the digits.
 * @returns the engine's ScenarioResult as JSON. @throws an AbortError once `signal` aborts.
 */
export async function comparePlan(
  pool: SimulationPool,
  parameters: ModelParameters,
  input: OutlookInput,
  changes: PlanChange[],
  { signal, onDone }: { signal?: AbortSignal; onDone?: (share: number) => void } = {},
): Promise<string> {
  comparisons += 1;
  const common = { model: shareValue(parameters), input, comparison: comparisons, changes };
  const options = signal ? { signal } : {};
  const starts = Array.from({ length: Math.ceil(input.replications / chunk) }, (_, i) => i * chunk);
  const parts: ComparedPart[] = [];
  const waiting = [...starts];
  // One task a thread at a time, so that an outlook or a fit is never queued behind all of them.
  const lane = async (): Promise<void> => {
    for (let from = waiting.shift(); from !== undefined; from = waiting.shift()) {
      const to = Math.min(input.replications, from + chunk);
      const task = { ...common, kind: 'part', from, to } satisfies WhatIfTask;
      parts.push(await pool.run<ComparedPart>(worker, task, options));
      onDone?.(parts.length / starts.length);
    }
  };
  await Promise.all(Array.from({ length: Math.min(pool.threads, starts.length) }, lane));
  return pool.run<string>(worker, { ...common, kind: 'finish', parts } satisfies WhatIfTask, options);
}

/** SHA-256 of a text; equal digests mean equal digits. */
export function digestOf(text: string): string {
  return createHash('sha256').update(text).digest('hex');
}
