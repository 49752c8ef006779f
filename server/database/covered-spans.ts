import type { Span } from './counting-spans.ts';
import type { VisitLineage } from './read-visits.ts';

/**
 * The time that logs speak for, as spans that neither touch nor overlap, ascending. A log speaks from its
 * period's start until its period's end or the time it was taken, whichever is first; one selected by
 * departures lacks the long stayers of its end, so the last `capSeconds` before that are left out.
 */
export function coveredSpans(
  lineage: readonly Pick<VisitLineage, 'periodFrom' | 'periodTo' | 'facts'>[],
  now: number,
  capSeconds: number,
): Span[] {
  const spans = lineage
    .map(({ periodFrom, periodTo, facts }) => {
      const end = Math.min(periodTo, facts.takenAt, now);
      return { from: periodFrom, to: facts.selectedBy === 'departed' ? end - capSeconds : end };
    })
    .filter((span) => span.to > span.from)
    .sort((a, b) => a.from - b.from);
  const joined: Span[] = [];
  for (const span of spans) {
    const last = joined.at(-1);
    if (last && span.from <= last.to) last.to = Math.max(last.to, span.to);
    else joined.push({ ...span });
  }
  return joined;
}

/** What lies between ascending spans. */
export function gapsBetween(spans: readonly Span[]): Span[] {
  return spans.slice(1).map((span, index) => ({ from: spans[index].to, to: span.from }));
}
