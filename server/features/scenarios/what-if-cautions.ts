import type { EntityManager } from 'typeorm';
import type { Caution } from '../../../shared/api/outlooks.ts';
import { coveredSpans } from '../../database/covered-spans.ts';
import { countCautions, groundCautions } from '../../database/ground-cautions.ts';
import { readDriftCautions } from '../../database/read-drift.ts';
import { readModelInUse } from '../../database/read-model.ts';
import type { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';

const hour = 3600;

/** What is to be said now of the grounds that plans are tried on: the model in use and the logs behind it. */
export async function whatIfCautions(read: EntityManager, site: Site, now: number): Promise<Caution[]> {
  const model = await readModelInUse(read, site.id);
  if (!model) return [];
  const logs = await read.findBy(VisitLog, { siteId: site.id, status: 'ready' });
  const facts = logs.map((log) => ({ periodFrom: log.periodFrom, periodTo: log.periodTo, facts: log }));
  const drifted = await readDriftCautions(read, site.id);
  return [
    ...drifted.map((text): Caution => ({ kind: 'model drifted', text })),
    ...countCautions(model.staysFrom),
    ...groundCautions(now, model.fittedAt ?? 0, coveredSpans(facts, now, site.stayCapHours * hour)),
  ];
}
