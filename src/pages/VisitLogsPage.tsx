import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { useServerNow } from '../features/sign-in/use-server-now.ts';
import { CoverageCalendar } from '../features/visit-logs/CoverageCalendar.tsx';
import { ExposureGaps } from '../features/visit-logs/ExposureGaps.tsx';
import { coverageHeadline, gapsBetween, periodInWords } from '../features/visit-logs/log-words.ts';
import { useSite, useVisitLogs } from '../features/visit-logs/queries.ts';
import { VisitLogList } from '../features/visit-logs/VisitLogList.tsx';
import { VisitRetention } from '../features/visit-logs/VisitRetention.tsx';

/** /sites/:siteId/logs */
export function VisitLogsPage() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const query = useVisitLogs(siteId);
  const now = useServerNow();
  const details = useSite(siteId);
  const logs = query.data;
  const mayUpload = site?.permissions.includes('visit-log:upload') ?? false;
  const mayCancel = site?.permissions.includes('arrival-model:fit') ?? false;
  // The oldest log is 1, so that a number stays with its log.
  const numberOf = (logId: string) => (logs ? logs.length - logs.findIndex(({ id }) => id === logId) : 0);

  if (!logs) {
    return (
      // Keyed apart from the page itself, so that nothing of it moves when it arrives.
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Logs" title="Visit logs" />
        <div className="page-pad max-w-3xl">
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={4} label="Loading the list of logs" />
          )}
        </div>
      </div>
    );
  }
  const gaps = gapsBetween(logs);
  return (
    <>
      <PageHead
        tab="Logs"
        title={site ? coverageHeadline(logs, site.timeZone) : 'Visit logs'}
        lede={
          <p className="max-w-[58rem]">
            {logs.length === 0
              ? 'Shoalmark learns from visit logs when patients arrive and how they leave. It needs two weeks at least; a year shows the seasons.'
              : 'Where logs overlap, the newest counts. A visit is never shown; only counts are.'}
          </p>
        }
      />
      <div className="page-pad grid grid-cols-[minmax(0,1fr)] gap-6 pt-2">
        {mayUpload ? (
          <div className="flex flex-wrap items-center gap-x-6 gap-y-2">
            <ButtonLink to={paths.newVisitLog(siteId)}>Load a visit log</ButtonLink>
            <Link to={paths.siteTokens(siteId)} className="link inline-flex min-h-11 items-center font-semibold">
              Machine tokens for nightly upload
            </Link>
            <Link to={paths.visitLogGuide(siteId)} className="link inline-flex min-h-11 items-center font-semibold">
              Columns, formats and a template
            </Link>
          </div>
        ) : null}
        {site && gaps.length > 0 ? (
          <Notice kind="caution" title="Days are missing between the logs.">
            <p>
              {gaps.map((gap) => periodInWords(gap, site.timeZone)).join('; ')}. Load them, or the model learns from the
              other days only.
            </p>
          </Notice>
        ) : null}
        {logs && site ? <CoverageCalendar logs={logs} numberOf={numberOf} timeZone={site.timeZone} /> : null}
        {site ? (
          <VisitLogList
            logs={logs}
            numberOf={numberOf}
            timeZone={site.timeZone}
            hrefOf={(logId) => paths.visitLog(siteId, logId)}
            progressOf={(jobId) => <JobProgress siteId={siteId} jobId={jobId} mayCancel={mayCancel} />}
            empty="No log was ever loaded here."
          />
        ) : null}
        {details.data && site ? (
          <ExposureGaps siteId={siteId} areas={details.data.areas} timeZone={site.timeZone} mayDeclare={mayUpload} />
        ) : null}
        {site ? <VisitRetention siteId={siteId} timeZone={site.timeZone} now={now} mayChange={mayUpload} /> : null}
      </div>
    </>
  );
}
