import type { AreaMeaning, ArrivalMeaning } from '../../../shared/domain/extract-meaning.ts';
import { rowProblems } from '../../../shared/domain/visit-row.ts';
import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { formatDate, formatNumber } from '../../lib/format.ts';

/** What a log's state is called. */
export function stateWord(log: VisitLogSummary): string {
  if (log.status === 'loading') return 'Loading';
  if (log.status === 'failed') return 'Not loaded';
  if (log.status === 'withdrawn') return 'Withdrawn';
  if (log.status === 'purged') return 'Deleted after the retention time';
  if (log.counts.length === 0) return 'Replaced by newer logs';
  const whole = log.counts.length === 1 && log.counts[0].from === log.period.from && log.counts[0].to === log.period.to;
  return whole ? 'Counts' : 'Counts in part';
}

/** A period in days: "1 Jan 2026 to 31 Mar 2026". */
export function periodInWords(period: { from: number; to: number }, timeZone: string): string {
  const from = formatDate(period.from, timeZone);
  const to = formatDate(period.to - 1, timeZone);
  return from === to ? from : `${from} to ${to}`;
}

/** A kind of problem as a sentence; a kind of a later version as it is named. */
export function problemInWords(problem: string): string {
  const known = Object.entries(rowProblems).find(([kind]) => kind === problem);
  return known ? known[1] : problem;
}

/** The list's headline: how much counts, and until when. */
export function coverageHeadline(logs: readonly VisitLogSummary[], timeZone: string): string {
  const counting = logs.filter((log) => log.counts.length > 0);
  if (counting.length === 0)
    return logs.some((log) => log.status === 'loading') ? 'The first log is loading.' : 'No visit log is loaded.';
  const from = Math.min(...counting.flatMap((log) => log.counts.map((span) => span.from)));
  const to = Math.max(...counting.flatMap((log) => log.counts.map((span) => span.to)));
  return `Visits are loaded from ${periodInWords({ from, to }, timeZone)}.`;
}

/** Stretches of at least a day between the first and the last loaded day that no log covers. */
export function gapsBetween(logs: readonly VisitLogSummary[]): { from: number; to: number }[] {
  const spans = logs.flatMap((log) => log.counts).sort((a, b) => a.from - b.from);
  const gaps: { from: number; to: number }[] = [];
  let end = spans.at(0)?.to ?? 0;
  for (const span of spans) {
    if (span.from - end >= 86_400) gaps.push({ from: end, to: span.from });
    end = Math.max(end, span.to);
  }
  return gaps;
}

/** Whole number with a word for rows left out, or a dash. */
export function leftOutInWords(rows: number): string {
  return rows === 0 ? '–' : formatNumber(rows);
}

export const arrivalMeaningWords: Record<ArrivalMeaning, string> = {
  'ambulance at the door': 'The ambulance at the door',
  offload: 'The patient handed over by the ambulance crew (offload)',
  registration: 'The patient registered at the desk',
  'not known': 'It is not known',
};

export const areaMeaningWords: Record<AreaMeaning, string> = {
  first: 'The first area',
  longest: 'The area of the longest stay',
  last: 'The last area',
  'not known': 'It is not known',
};
