import { expect, test } from 'vitest';
import type { VisitLogSummary } from '../../../../shared/api/visit-logs.ts';
import { coverDays } from '../../../../src/features/visit-logs/cover-days.ts';

const at = (text: string) => Date.parse(text) / 1000;
const timeZone = 'Europe/London';

function log(id: string, ...counts: [from: string, to: string][]): VisitLogSummary {
  const spans = counts.map(([from, to]) => ({ from: at(from), to: at(to) }));
  return {
    id,
    kind: 'visits' as const,
    status: 'ready',
    fileName: `${id}.csv`,
    rows: 1,
    purgedTo: null,
    period: spans.at(0) ?? { from: 0, to: 0 },
    counts: spans,
    leftOutRows: 0,
    uploadedBy: 'Sam Steward',
    uploadedAt: 0,
    readyAt: 0,
    withdrawnBy: null,
    withdrawnAt: null,
    reason: null,
    jobId: null,
  };
}

/** "1-3 whole a; 4 part b" */
function told(logs: VisitLogSummary[]) {
  return coverDays(logs, timeZone).map(({ year, month, days }) => {
    const runs: { from: number; to: number; what: string }[] = [];
    for (const { day, cover, logId } of days) {
      const what = logId === null ? cover : `${cover} ${logId}`;
      const last = runs.at(-1);
      if (last?.what === what) last.to = day;
      else runs.push({ from: day, to: day, what });
    }
    const words = runs.map(({ from, to, what }) => `${String(from)}-${String(to)} ${what}`);
    return `${String(year)}-${String(month)}: ${words.join('; ')}`;
  });
}

test('each local day is covered whole, in part, by the log that holds most of it, or missing', () => {
  // London is an hour ahead of UTC until 25 October 2026 (IANA time zone data): its days begin at 23:00 UTC before.
  const logs = [
    log('new', ['2026-10-24T23:00:00Z', '2026-10-28T15:00:00Z']),
    log('old', ['2026-09-28T23:00:00Z', '2026-10-19T23:00:00Z'], ['2026-10-28T15:00:00Z', '2026-10-29T00:00:00Z']),
  ];
  expect(told(logs)).toEqual([
    '2026-10: 1-19 whole old; 20-24 missing; 25-28 whole new; 29-31 outside',
    '2026-9: 1-28 outside; 29-30 whole old',
  ]);
});

test('the day on which the extract was taken is covered in part, unless it was taken in its last minute', () => {
  expect(told([log('a', ['2026-11-01T00:00:00Z', '2026-11-03T12:00:00Z'])])).toEqual([
    '2026-11: 1-2 whole a; 3-3 part a; 4-30 outside',
  ]);
  expect(told([log('a', ['2026-11-01T00:00:00Z', '2026-11-02T23:59:30Z'])])).toEqual([
    '2026-11: 1-2 whole a; 3-30 outside',
  ]);
});

test('a year’s end, a leap day, and a site without a log', () => {
  const months = coverDays([log('a', ['2027-12-31T00:00:00Z', '2028-03-02T00:00:00Z'])], timeZone);
  expect(months.map(({ year, month, days }) => [year, month, days.length])).toEqual([
    [2028, 3, 31],
    [2028, 2, 29],
    [2028, 1, 31],
    [2027, 12, 31],
  ]);
  expect(coverDays([log('none')], timeZone)).toEqual([]);
});
