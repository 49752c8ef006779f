import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { coverageHeadline, gapsBetween, periodInWords } from '../features/visit-logs/log-words.ts';
import { useVisitLogs } from '../features/visit-logs/queries.ts';
import { VisitLogList } from '../features/visit-logs/VisitLogList.tsx';

/** /sites/:siteId/logs */
export function VisitLogsPage() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const query = useVisitLogs(siteId);
  const logs = query.data;
  const mayUpload = site?.permissions.includes('visit-log:upload') ?? false;
  const mayCancel = site?.permissions.includes('arrival-model:fit') ?? false;
  const gaps = logs ? gapsBetween(logs) : [];
  return (
    <>
      <PageHead
        tab="Logs"
        title={logs && site ? coverageHeadline(logs, site.timeZone) : 'Visit logs'}
        lede={
          logs ? (
            <p className="max-w-[58rem]">
              {logs.length === 0
                ? 'Shoalmark learns from visit logs when patients arrive and how they leave. It needs two weeks at least; a year shows the seasons.'
                : 'Where logs overlap, the newest counts. A visit is never shown; only counts are.'}
            </p>
          ) : null
        }
      />
      <div className="page-pad grid gap-6 pt-2">
        {mayUpload ? (
          <div>
            <ButtonLink to={paths.newVisitLog(siteId)}>Load a visit log</ButtonLink>
          </div>
        ) : null}
        {query.error && !logs ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={4} label="Loading the list of logs" /> : null}
        {site && gaps.length > 0 ? (
          <Notice kind="caution" title="Days are missing between the logs.">
            <p>
              {gaps.map((gap) => periodInWords(gap, site.timeZone)).join('; ')}. Load them, or the model learns from the
              other days only.
            </p>
          </Notice>
        ) : null}
        {logs && site ? (
          <VisitLogList
            logs={logs}
            timeZone={site.timeZone}
            hrefOf={(logId) => paths.visitLog(siteId, logId)}
            progressOf={(jobId) => <JobProgress siteId={siteId} jobId={jobId} mayCancel={mayCancel} />}
            empty="No log was ever loaded here."
          />
        ) : null}
      </div>
    </>
  );
}
