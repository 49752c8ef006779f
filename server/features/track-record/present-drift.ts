import type { EntityManager } from 'typeorm';
import type { Drift } from '../../../shared/api/track-record.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { mondayOfWeek, readDriftOfModelInUse } from '../../database/read-drift.ts';
import type { Site } from '../../entities/Site.ts';

/** What the watch found for the model in use, in words; null without a model. */
export async function presentDriftOfModelInUse(read: EntityManager, site: Site): Promise<Drift | null> {
  const found = await readDriftOfModelInUse(read, site.id);
  if (!found) return null;
  const zone = makeZone(site.timeZone);
  const startOf = (number: number): number => instantOfLocal(zone, mondayOfWeek(number));
  return {
    modelId: found.modelId,
    weeks: found.weeks,
    foundAt: found.foundAt,
    findings: found.findings.map(({ series, kind, week, since, ratio, text }) => ({
      series,
      kind,
      foundAt: startOf(week + 1),
      since: startOf(since),
      ratio,
      text,
    })),
  };
}
