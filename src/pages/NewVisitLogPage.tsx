import { useState } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { useServerNow } from '../features/sign-in/use-server-now.ts';
import { useSite, useVisitLogMapping, useVisitLogs } from '../features/visit-logs/queries.ts';
import { useUnsavedWork } from '../lib/unsaved-work.ts';
import { UploadWalk } from '../features/visit-logs/UploadWalk.tsx';

/** /sites/:siteId/logs/new */
export function NewVisitLogPage() {
  const { siteId = '' } = useParams();
  const navigate = useNavigate();
  const now = useServerNow();
  const held = useSession().sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const site = useSite(siteId);
  const mayUpload = held.includes('visit-log:upload');
  const last = useVisitLogMapping(siteId, mayUpload);
  const [begun, setBegun] = useState(false);
  useUnsavedWork(begun, 'a file that is not loaded yet');
  const allLogs = (
    <Link to={paths.visitLogs(siteId)} className="link inline-block min-h-6">
      All logs
    </Link>
  );
  const logs = useVisitLogs(siteId, mayUpload);
  if (site.data && mayUpload && last.data !== undefined && logs.data) {
    return (
      // The walk begins with a file, chosen or dropped; from then on leaving asks first.
      <div onChangeCapture={() => setBegun(true)} onDropCapture={() => setBegun(true)}>
        <UploadWalk
          siteId={siteId}
          areas={site.data.areas}
          timeZone={site.data.timeZone}
          now={now}
          last={last.data}
          shiftEnds={site.data.shifts.map(({ endMinute }) => endMinute)}
          logs={logs.data}
          aside={allLogs}
          guideHref={paths.visitLogGuide(siteId)}
          onAccepted={(logId) => void navigate(paths.visitLog(siteId, logId), { state: { saved: true } })}
        />
      </div>
    );
  }
  return (
    <>
      <PageHead tab="Load a visit log" title="Load a visit log." aside={allLogs} />
      <div className="page-pad grid max-w-3xl gap-6">
        {mayUpload ? null : (
          <Notice kind="caution" title="Loading logs is the data steward’s work.">
            <p>Your roles at this site do not include it. Ask your administrator if they should.</p>
          </Notice>
        )}
        {site.error ? (
          <ProblemNotice error={site.error} onRetry={() => void site.refetch()} retrying={site.isFetching} />
        ) : null}
        {last.error ? (
          <ProblemNotice error={last.error} onRetry={() => void last.refetch()} retrying={last.isFetching} />
        ) : null}
        {logs.error ? (
          <ProblemNotice error={logs.error} onRetry={() => void logs.refetch()} retrying={logs.isFetching} />
        ) : null}
        {site.isPending || (mayUpload && (last.isPending || logs.isPending)) ? (
          <SkeletonLines lines={4} label="Loading the site’s care areas" />
        ) : null}
      </div>
    </>
  );
}
