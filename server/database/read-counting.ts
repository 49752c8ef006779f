import type { EntityManager } from 'typeorm';
import { VisitLog } from '../entities/VisitLog.ts';
import { countingSpans, type Span } from './counting-spans.ts';

/** The site's logs that count now, with the parts of their periods that no newer log covers. */
export async function readCounting(
  read: EntityManager,
  siteId: string,
): Promise<{ id: string; kind: VisitLog['kind']; counts: Span[] }[]> {
  const logs = await read.findBy(VisitLog, { siteId, status: 'ready' });
  const spans = countingSpans(logs);
  return logs.map(({ id, kind, number }) => ({ id, kind, counts: spans.get(number) ?? [] }));
}
