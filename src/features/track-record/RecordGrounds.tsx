import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDate, formatNumber } from '../../lib/format.ts';

/** What the watch over the model in use found. */
export function DriftNotice({ drift }: { drift: TrackRecord['drift'] }) {
  if (drift === null) return null;
  if (drift.findings.length > 0) {
    return (
      <Notice kind="caution" title="The model in use has drifted">
        {drift.findings.map((finding) => (
          <p key={`${finding.series} ${finding.kind}`}>{finding.text}</p>
        ))}
      </Notice>
    );
  }
  return (
    <Notice title={drift.weeks < 2 ? 'Too early to watch the model in use' : 'The model in use is watched'}>
      <p>
        {drift.weeks < 2
          ? 'Once two whole weeks of its forecasts are scored, each week is checked for what chance does not explain.'
          : `Checked each week, ${formatCount(drift.weeks, 'whole week')} so far: nothing that chance does not explain. By chance alone the watch speaks up less than once a year.`}
      </p>
    </Notice>
  );
}

type Counted = Pick<TrackRecord['weekOutlooks'], 'waiting' | 'withdrawn' | 'notRecorded' | 'overtaken' | 'withoutLaws'>;

/** What became of the outlooks that are not scored: "3 wait for a log …, 1 fell in hours …"; each begins with a comma. */
function restInWords(counted: Counted, overtaken: string): string {
  const rest: [n: number, one: string, many: string, what: string][] = [
    [counted.waiting, 'waits', 'wait', 'for a log that tells what came'],
    [counted.withdrawn, 'is', 'are', 'not scored because the log that told was withdrawn'],
    [counted.notRecorded, 'fell', 'fell', 'in hours that were not recorded'],
    [counted.overtaken, 'was', 'were', overtaken],
    [counted.withoutLaws, 'was', 'were', 'issued before the distributions were kept'],
  ];
  return rest
    .filter(([n]) => n > 0)
    .map(([n, one, many, what]) => `, ${formatNumber(n)} ${n === 1 ? one : many} ${what}`)
    .join('');
}

/** How many forecasts are behind the record; every one that was issued is named. */
export function RecordGrounds({ record, timeZone }: { record: TrackRecord; timeZone: string }) {
  const { outlooks, weekOutlooks, summary } = record;
  const rest = restInWords(
    outlooks,
    'followed by a newer one before anything to score it on began (saving a census issues one)',
  );
  const weekRest = restInWords(weekOutlooks, 'not issued by the daily timetable and would be no fair sample');
  return (
    <section className="grid gap-2" aria-label="What the record stands on">
      <h2 className="text-h2">What the record stands on</h2>
      <p className="max-w-[44rem] text-ink2">
        {formatCount(summary.n, 'score')} over {formatCount(summary.weeks, 'week')} under this filter. In all{' '}
        {formatCount(outlooks.issued, 'outlook was', 'outlooks were')} issued
        {outlooks.firstAt === null ? '' : ` since ${formatDate(outlooks.firstAt, timeZone)}`}; none is left out or
        changed: {formatCount(outlooks.scored, 'is scored', 'are scored')}
        {rest}.
      </p>
      {weekOutlooks.issued === 0 ? null : (
        <p className="max-w-[44rem] text-ink2">
          Of the week ahead {formatCount(weekOutlooks.issued, 'outlook was', 'outlooks were')} issued:{' '}
          {formatCount(weekOutlooks.scored, 'is scored', 'are scored')}
          {weekRest}.
          {weekOutlooks.recomputed > 0
            ? ` ${formatCount(weekOutlooks.recomputed, 'of them was', 'of them were')} recomputed later.`
            : ''}{' '}
          {weekOutlooks.issued === 1 ? 'It is' : 'They are'} what stands behind everything more than a day ahead.
        </p>
      )}
      {outlooks.recomputed > 0 ? (
        <p className="max-w-[44rem] text-ink2">
          <b className="text-ink">{formatCount(outlooks.recomputed, 'was', 'were')} recomputed later</b>, by the same
          code from what was known at their time: an hour before each shift, with{' '}
          {formatNumber(outlooks.replicationsRecomputed ?? 0)} replications each, the counts that the log shows, and the
          staffed beds, areas and limits of today.
        </p>
      ) : null}
      <p className="max-w-[44rem] text-ink2">
        A chance is held against the staffed beds that its outlook was issued with, not against beds opened because of
        it.
      </p>
    </section>
  );
}
