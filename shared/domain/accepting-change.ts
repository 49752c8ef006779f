import type { TimeSpan } from './file-study.ts';

type LogKind = 'visits' | 'hourly counts';

/** What accepting a log of a period would change in what the site's logs cover. */
export interface AcceptingChange {
  /** Hours of the period that no log covers yet. */
  newHours: number;
  /** Logs of which a part would no longer count, most first, with how many hours. */
  replaces: { id: string; hours: number }[];
}

/**
 * @param logs the spans of each log that count; those of different logs do not overlap
 * @param kind of the new log: hourly counts stand back behind visits and replace none
 */
export function acceptingChange(
  period: TimeSpan,
  logs: readonly { id: string; counts: readonly TimeSpan[]; kind?: LogKind }[],
  kind: LogKind = 'visits',
): AcceptingChange {
  const overlaps = logs
    .map(({ id, counts, kind: own = 'visits' }) => ({
      id,
      own,
      hours: counts.reduce((sum, span) => sum + overlap(span, period), 0) / 3600,
    }))
    .filter(({ hours }) => hours > 0)
    .sort((a, b) => b.hours - a.hours);
  const covered = overlaps.reduce((sum, { hours }) => sum + hours, 0);
  const replaces = overlaps
    .filter(({ own }) => kind === 'visits' || own === 'hourly counts')
    .map(({ id, hours }) => ({ id, hours }));
  return { newHours: (period.to - period.from) / 3600 - covered, replaces };
}

function overlap(one: TimeSpan, other: TimeSpan): number {
  return Math.max(0, Math.min(one.to, other.to) - Math.max(one.from, other.from));
}
