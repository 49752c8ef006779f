import { deserialize } from 'node:v8';
import { outlookFromParts, prepareOutlook, simulateOutlookPart } from '../../../shared/forecasting/issue-outlook.ts';
import type { PreparedOutlook } from '../../../shared/forecasting/issue-outlook.ts';
import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import { outlookLaws, type IssuedLaw } from '../../../shared/forecasting/outlook-laws.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import type { ModelParameters } from '../../database/read-model.ts';

/** A model's parameters, serialised once for all threads: handing them over costs nothing, reading them is left to a thread that has not yet. */
export interface SharedModel {
  key: number;
  bytes: SharedArrayBuffer;
}

/** One thread's share of the replications, or the outlook from all shares. Tasks of one outlook have the same `outlook`. */
export type OutlookTask = { outlook: number; model: SharedModel; input: OutlookInput } & (
  { kind: 'part'; from: number; to: number } | { kind: 'finish'; parts: NeedPart[] }
);

const keptModels = 8;
const keptOutlooks = 4;
const models = new Map<number, ModelParameters>();
const outlooks = new Map<number, PreparedOutlook>();

/** A kept value, or a new one in place of the oldest. */
function kept<Value>(values: Map<number, Value>, most: number, key: number, make: () => Value): Value {
  const known = values.get(key);
  if (known !== undefined) return known;
  const made = make();
  if (values.size >= most) values.delete(values.keys().next().value ?? key);
  values.set(key, made);
  return made;
}

/** An outlook, and the distributions behind it that will be scored. */
export interface FinishedOutlook {
  result: OutlookResult;
  laws: IssuedLaw[];
}

export default function work(task: OutlookTask): NeedPart | FinishedOutlook {
  const { model, input, outlook } = task;
  const parameters = kept(
    models,
    keptModels,
    model.key,
    () => deserialize(Buffer.from(model.bytes)) as ModelParameters,
  );
  const prepared = kept(outlooks, keptOutlooks, outlook, () => prepareOutlook(parameters, input));
  if (task.kind === 'part') return simulateOutlookPart(prepared, task.from, task.to);
  const result = outlookFromParts(prepared, task.parts);
  return { result, laws: outlookLaws(prepared, task.parts, result, parameters) };
}
