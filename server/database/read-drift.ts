import type { EntityManager } from 'typeorm';
import { localDate } from '../../shared/domain/zoned-time.ts';
import { driftSentence } from '../../shared/forecasting/drift-sentence.ts';
import type { DriftFinding, DriftReport } from '../../shared/forecasting/drift-watch.ts';
import { readModelInUse } from './read-model.ts';

const week = 7 * 86_400;

/** Local seconds of the Monday 00:00 on which a week of scores begins. */
export function mondayOfWeek(number: number): number {
  return number * week - 3 * 86_400;
}

/** What the watch over the scores of the model in use found, as stored on it, each finding in words; null without a model. */
export async function readDriftOfModelInUse(
  read: EntityManager,
  siteId: string,
): Promise<{
  modelId: string;
  foundAt: number | null;
  weeks: number;
  findings: (DriftFinding & { text: string })[];
} | null> {
  const model = await readModelInUse(read, siteId);
  if (!model) return null;
  const report = model.drift === null ? { weeks: 0, findings: [] } : (JSON.parse(model.drift) as DriftReport);
  return {
    modelId: model.id,
    foundAt: model.driftFoundAt,
    weeks: report.weeks,
    findings: report.findings.map((finding) => ({
      ...finding,
      text: driftSentence(finding, localDate(mondayOfWeek(finding.since))),
    })),
  };
}

/** The findings in words, for whatever stands on the model in use: Tonight, the week ahead, the brief. */
export async function readDriftCautions(read: EntityManager, siteId: string): Promise<string[]> {
  return (await readDriftOfModelInUse(read, siteId))?.findings.map(({ text }) => text) ?? [];
}
