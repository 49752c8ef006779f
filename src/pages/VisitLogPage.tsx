import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { periodInWords, stateWord } from '../features/visit-logs/log-words.ts';
import { useLogPresence } from '../features/visit-logs/kept-visits-queries.ts';
import { PresenceCheck } from '../features/visit-logs/PresenceCheck.tsx';
import { useVisitLog } from '../features/visit-logs/queries.ts';
import { VisitLogReport } from '../features/visit-logs/VisitLogReport.tsx';
import { WithdrawLog } from '../features/visit-logs/WithdrawLog.tsx';
import { formatCount, formatDateTime } from '../lib/format.ts';

/** /sites/:siteId/logs/:logId */
export function VisitLogPage() {
  const { siteId = '', logId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const query = useVisitLog(siteId, logId);
  const log = query.data;
  const presence = useLogPresence(siteId, logId, log?.status === 'ready');
  const may = (permission: 'visit-log:upload' | 'arrival-model:fit') => site?.permissions.includes(permission) ?? false;
  if (!log || !site) {
    return (
      // Keyed apart from the page itself, so that nothing of it moves when it arrives.
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Visit log" title="Visit log" />
        <div className="page-pad max-w-3xl">
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={6} label="Loading the log" />
          )}
        </div>
      </div>
    );
  }
  const state = stateWord(log);
  const visits = log.kind === 'hourly counts' ? formatCount(log.rows, 'hourly count') : formatCount(log.rows, 'visit');
  const title =
    log.status === 'loading'
      ? `Loading ${visits}.`
      : log.status === 'failed'
        ? 'This log was not loaded.'
        : log.status === 'withdrawn'
          ? 'This log is withdrawn.'
          : log.status === 'purged'
            ? 'The visits of this log were deleted after the retention time.'
            : state === 'Counts'
              ? `${visits} count.`
              : state === 'Counts in part'
                ? `${visits}, of which a part counts.`
                : 'Newer logs replaced this one.';
  return (
    <>
      <PageHead
        tab="Visit log"
        title={title}
        lede={<p>Arrivals {periodInWords(log.period, site.timeZone)}.</p>}
        aside={
          <div className="grid gap-0.5">
            <div>
              Uploaded <b className="text-ink">{formatDateTime(log.uploadedAt, site.timeZone)}</b>, {log.uploadedBy}
            </div>
            {log.readyAt === null ? null : <div>Ready {formatDateTime(log.readyAt, site.timeZone)}</div>}
            <Link to={paths.visitLogs(siteId)} className="link inline-block min-h-6">
              All logs
            </Link>
          </div>
        }
      />
      <div className="page-pad grid grid-cols-[minmax(0,1fr)] gap-8 pt-2">
        {log.status === 'loading' && log.jobId ? (
          <JobProgress siteId={siteId} jobId={log.jobId} mayCancel={may('arrival-model:fit')} />
        ) : null}
        {log.status === 'ready' && may('arrival-model:fit') ? (
          <div>
            <ButtonLink to={paths.arrivalModels(siteId)}>Fit an arrival model</ButtonLink>
          </div>
        ) : null}
        <VisitLogReport log={log} timeZone={site.timeZone} />
        {presence.data ? <PresenceCheck compared={presence.data} timeZone={site.timeZone} /> : null}
        {presence.error ? (
          <ProblemNotice
            error={presence.error}
            onRetry={() => void presence.refetch()}
            retrying={presence.isFetching}
          />
        ) : null}
        {log.status === 'ready' && may('visit-log:upload') ? <WithdrawLog siteId={siteId} log={log} /> : null}
      </div>
    </>
  );
}
