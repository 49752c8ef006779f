import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { localParts } from '../../../shared/domain/zoned-time.ts';
import { zoneOf } from '../../lib/format.ts';

/** One day of the calendar. */
export interface CoverDay {
  /** Day of the month, 1 to 31. */
  day: number;
  /** `outside`: before the first or after the last day loaded. */
  cover: 'whole' | 'part' | 'missing' | 'outside';
  /** The log that covers most of it; null if none does. */
  logId: string | null;
}

export interface CoverMonth {
  year: number;
  /** 1 to 12. */
  month: number;
  days: CoverDay[];
}

const day = 86_400;
/** Seconds that a day may lack and still be called whole: an extract taken in the last minute ends there. */
const slack = 60;

/**
 * Which local days the logs that count cover, month by month from the first to the last loaded, the
 * newest month first.
 */
export function coverDays(logs: readonly VisitLogSummary[], timeZone: string): CoverMonth[] {
  const spans = logs.flatMap(({ id, counts }) => counts.map((span) => ({ id, ...span })));
  if (spans.length === 0) return [];
  const zone = zoneOf(timeZone);
  const firstDay = Math.floor(zone.toLocal(Math.min(...spans.map(({ from }) => from))) / day);
  const lastDay = Math.floor(zone.toLocal(Math.max(...spans.map(({ to }) => to)) - 1) / day);
  const months: CoverMonth[] = [];
  const first = localParts(firstDay * day);
  const last = localParts(lastDay * day);
  for (let at = first.year * 12 + first.month - 1; at <= last.year * 12 + last.month - 1; at += 1) {
    const year = Math.floor(at / 12);
    const month = (at % 12) + 1;
    const start = Date.UTC(year, month - 1, 1) / 1000 / day;
    const length = Date.UTC(year, month, 1) / 1000 / day - start;
    const days = Array.from({ length }, (_, index): CoverDay => {
      const number = start + index;
      if (number < firstDay || number > lastDay) return { day: index + 1, cover: 'outside', logId: null };
      const from = instantOfLocal(zone, number * day);
      const to = instantOfLocal(zone, (number + 1) * day);
      const held = spans
        .map(({ id, ...span }) => ({ id, seconds: Math.min(span.to, to) - Math.max(span.from, from) }))
        .filter(({ seconds }) => seconds > 0)
        .sort((a, b) => b.seconds - a.seconds);
      const total = held.reduce((sum, { seconds }) => sum + seconds, 0);
      if (held.length === 0) return { day: index + 1, cover: 'missing', logId: null };
      return { day: index + 1, cover: total >= to - from - slack ? 'whole' : 'part', logId: held[0].id };
    });
    months.push({ year, month, days });
  }
  return months.reverse();
}
