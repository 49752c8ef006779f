import { outlookFromParts, simulateOutlookPart } from '../../../shared/forecasting/issue-outlook.ts';
import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import type { ModelParameters } from '../../database/read-model.ts';

/** One thread's share of the replications, or the outlook from all shares. */
export type OutlookTask =
  | { kind: 'part'; parameters: ModelParameters; input: OutlookInput; from: number; to: number }
  | { kind: 'finish'; parameters: ModelParameters; input: OutlookInput; parts: NeedPart[] };

export default function work(task: OutlookTask): NeedPart | OutlookResult {
  const { parameters, input } = task;
  return task.kind === 'part'
    ? simulateOutlookPart(parameters, input, task.from, task.to)
    : outlookFromParts(parameters, input, task.parts);
}
