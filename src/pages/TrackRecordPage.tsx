import { Link, useParams } from 'react-router-dom';
import { getTrackRecordCsv } from '../../shared/api/track-record.ts';
import { paths } from '../app/paths.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { AcknowledgedApart } from '../features/track-record/AcknowledgedApart.tsx';
import { useFilter } from '../features/track-record/filter-in-address.ts';
import { FilterFields } from '../features/track-record/FilterFields.tsx';
import { useTrackRecord } from '../features/track-record/queries.ts';
import { Recompute } from '../features/track-record/Recompute.tsx';
import { RecordFindings } from '../features/track-record/RecordFindings.tsx';
import { DriftNotice, RecordGrounds } from '../features/track-record/RecordGrounds.tsx';
import { RecordParts } from '../features/track-record/RecordParts.tsx';
import { RecordPoints } from '../features/track-record/RecordPoints.tsx';
import { addressOf } from '../lib/api-client.ts';

/** /sites/:siteId/track-record */
export function TrackRecordPage() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const [filter, change] = useFilter();
  const query = useTrackRecord(siteId, filter);
  const record = query.data;
  if (!record || !site) {
    return (
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Track record" title="Track record" />
        <div className="page-pad max-w-3xl">
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={6} label="Loading the track record" />
          )}
        </div>
      </div>
    );
  }
  const mayFit = site.permissions.includes('arrival-model:fit');
  const csv = addressOf(getTrackRecordCsv.path, { siteId }, filter);
  return (
    <>
      <PageHead
        tab="Track record"
        title={`${record.verdict.headline}.`}
        lede={<p>How past forecasts did against what then happened. They tell nothing of a major incident.</p>}
        aside={
          <div className="grid gap-0.5">
            <a href={csv} download className="link inline-block min-h-6">
              Scores as CSV
            </a>
            <Link to={paths.howNumbersAreMade('track-record')} className="link inline-block min-h-6">
              How the numbers are made
            </Link>
          </div>
        }
      />
      <div
        className="page-pad grid grid-cols-[minmax(0,1fr)] gap-8 pt-2"
        aria-busy={query.isPlaceholderData || undefined}
      >
        {query.error ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {record.recomputing && mayFit ? (
          <JobProgress siteId={siteId} jobId={record.recomputing} mayCancel />
        ) : record.recomputing ? (
          <p className="text-ink2" role="status">
            Past weeks are being recomputed; more appear here by themselves.
          </p>
        ) : null}
        <DriftNotice drift={record.drift} />
        <FilterFields record={record} filter={filter} onChange={change} />
        {record.summary.n === 0 ? (
          <p className="max-w-[44rem] text-ink2">
            Nothing is scored under this filter. A forecast is scored once an accepted visit log tells what came: a data
            steward loads one under Logs.
          </p>
        ) : (
          <>
            <RecordFindings record={record} timeZone={site.timeZone} />
            <RecordParts record={record} filter={filter} />
            <AcknowledgedApart record={record} />
            <RecordPoints record={record} siteId={siteId} timeZone={site.timeZone} />
          </>
        )}
        <RecordGrounds record={record} timeZone={site.timeZone} />
        {mayFit && !record.recomputing && record.outlooks.recomputed === 0 ? <Recompute siteId={siteId} /> : null}
      </div>
    </>
  );
}
