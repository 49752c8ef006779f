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

/** What became of the outlooks that are not scored. */
function restOf(counted: Counted, overtaken: string) {
  return [
    [counted.waiting, 'wait for a log that tells what came'],
    [counted.withdrawn, 'are not scored because the log that told was withdrawn'],
    [counted.notRecorded, 'fell in hours that were not recorded'],
    [counted.overtaken, overtaken],
    [counted.withoutLaws, 'were issued before the distributions were kept'],
  ] as const;
}

/** How many forecasts are behind the record; every one that was issued is named. */
export function RecordGrounds({ record, timeZone }: { record: TrackRecord; timeZone: string }) {
  const { outlooks, weekOutlooks, summary } = record;
  const rest = restOf(
    outlooks,
    'were followed by a newer one before anything they would be scored on began (saving a census issues one)',
  );
  const weekRest = restOf(weekOutlooks, 'were not issued by the daily timetable, which would be no fair sample');
  return (
    <section className="grid gap-2" aria-label="What the record stands on">
      <h2 className="text-h2">What the record stands on</h2>
      <p className="max-w-[44rem] text-ink2">
        {formatCount(summary.n, 'score')} over {formatCount(summary.weeks, 'week')} under this filter. In all{' '}
        {formatCount(outlooks.issued, 'outlook was', 'outlooks were')} issued
        {outlooks.firstAt === null ? '' : ` since ${formatDate(outlooks.firstAt, timeZone)}`}; none is left out or
        changed: {formatNumber(outlooks.scored)} are scored
        {rest
          .filter(([n]) => n > 0)
          .map(([n, words]) => `, ${formatNumber(n)} ${words}`)
          .join('')}
        .
      </p>
      {weekOutlooks.issued === 0 ? null : (
        <p className="max-w-[44rem] text-ink2">
          Of the week ahead {formatCount(weekOutlooks.issued, 'outlook was', 'outlooks were')} issued:{' '}
          {formatNumber(weekOutlooks.scored)} are scored
          {weekRest
            .filter(([n]) => n > 0)
            .map(([n, words]) => `, ${formatNumber(n)} ${words}`)
            .join('')}
          .
          {weekOutlooks.recomputed > 0
            ? ` ${formatNumber(weekOutlooks.recomputed)} of them were recomputed later.`
            : ''}{' '}
          They are what stands behind everything more than a day ahead.
        </p>
      )}
      {outlooks.recomputed > 0 ? (
        <p className="max-w-[44rem] text-ink2">
          <b className="text-ink">{formatNumber(outlooks.recomputed)} were recomputed later</b>, by the same code from
          what was known at their time: an hour before each shift, with{' '}
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
