import type { TimeSpan } from './file-study.ts';

/** What accepting a log of a period would change in what the site's logs cover. */
export interface AcceptingChange {
  /** Hours of the period that no log covers yet. */
  newHours: number;
  /** Logs of which a part would no longer count, most first, with how many hours. */
  replaces: { id: string; hours: number }[];
}

/** @param logs the spans of each log that count; those of different logs do not overlap */
export function acceptingChange(
  period: TimeSpan,
  logs: readonly { id: string; counts: readonly TimeSpan[] }[],
): AcceptingChange {
  const replaces = logs
    .map(({ id, counts }) => ({ id, hours: counts.reduce((sum, span) => sum + overlap(span, period), 0) / 3600 }))
    .filter(({ hours }) => hours > 0)
    .sort((a, b) => b.hours - a.hours);
  const replaced = replaces.reduce((sum, { hours }) => sum + hours, 0);
  return { newHours: (period.to - period.from) / 3600 - replaced, replaces };
}

function overlap(one: TimeSpan, other: TimeSpan): number {
  return Math.max(0, Math.min(one.to, other.to) - Math.max(one.from, other.from));
}
