import {
  prepareScenario,
  compareScenarioPart,
  scenarioFromParts,
} from '../../../shared/forecasting/compare-scenario.ts';
import type { PreparedScenario } from '../../../shared/forecasting/compare-scenario.ts';
import type { ComparedPart } from '../../../shared/forecasting/compare-need.ts';
import { makeExactWire } from '../../../shared/forecasting/exact-wire.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import type { PlanChange } from '../../../shared/domain/plan-change.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { readSharedValue, type SharedValue } from '../../simulation/share-value.ts';

/** Prepares the exact method as text, runs one share of a comparison's replications, or ends it as text. */
export type WhatIfTask = { model: SharedValue; input: OutlookInput } & (
  | { kind: 'exact' }
  | { kind: 'part'; comparison: number; changes: PlanChange[]; from: number; to: number }
  | { kind: 'finish'; comparison: number; changes: PlanChange[]; parts: ComparedPart[] }
);

let latest: { comparison: number; prepared: PreparedScenario } | null = null;

export default function work(task: WhatIfTask): ComparedPart | string {
  const model = readSharedValue(task.model) as ModelParameters;
  const { input } = task;
  if (task.kind === 'exact') return JSON.stringify(makeExactWire(model, input));
  if (latest?.comparison !== task.comparison) {
    latest = { comparison: task.comparison, prepared: prepareScenario(model, input, task.changes) };
  }
  const { prepared } = latest;
  return task.kind === 'part'
    ? compareScenarioPart(prepared, task.from, task.to)
    : JSON.stringify(scenarioFromParts(input, prepared, task.parts));
}
