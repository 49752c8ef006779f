/** A stretch of time, UTC seconds, its end left out. */
export interface Span {
  from: number;
  to: number;
}

/**
 * The parts of each log's period that count. Where periods overlap, the newest log counts: the parts
 * that a newer one covers are taken out of the older. Hourly counts stand back behind visits, which tell more.
 * @param logs ready logs of one site, in any order
 * @returns spans by log number, ascending; none if newer logs cover the whole period
 */
export function countingSpans(
  logs: readonly { number: number; periodFrom: number; periodTo: number; kind?: 'visits' | 'hourly counts' }[],
): Map<number, Span[]> {
  const taken: Span[] = [];
  const result = new Map<number, Span[]>();
  for (const log of [...logs].sort((a, b) => rank(a.kind) - rank(b.kind) || b.number - a.number)) {
    let free: Span[] = [{ from: log.periodFrom, to: log.periodTo }];
    for (const other of taken) {
      free = free.flatMap((span) =>
        [
          { from: span.from, to: Math.min(span.to, other.from) },
          { from: Math.max(span.from, other.to), to: span.to },
        ].filter((part) => part.to > part.from),
      );
    }
    result.set(log.number, free);
    taken.push({ from: log.periodFrom, to: log.periodTo });
  }
  return result;
}

const rank = (kind: 'visits' | 'hourly counts' = 'visits'): number => (kind === 'visits' ? 0 : 1);
