import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { OwnSessionList } from '../features/sign-in/OwnSessionList.tsx';
import { useOwnSessions } from '../features/sign-in/own-sessions.ts';
import { SignOutEverywhere } from '../features/sign-in/SignOutEverywhere.tsx';
import { formatCount } from '../lib/format.ts';

/** /sessions: where the person is signed in. */
export function OwnSessionsPage() {
  const query = useOwnSessions();
  const sessions = query.data?.sessions;
  return (
    <>
      <PageHead
        tab="Signed in"
        title={sessions ? `Signed in on ${formatCount(sessions.length, 'device')}` : 'Where you are signed in'}
        lede={
          <p className="max-w-[58rem]">
            Each browser in which you signed in and did not sign out. End what you do not know, or left open: it is
            refused from its next request on.
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-8 pt-2">
        {query.error && !sessions ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={3} label="Loading where you are signed in" /> : null}
        {sessions ? <OwnSessionList sessions={sessions} /> : null}
        {sessions && sessions.length > 1 ? (
          <div>
            <SignOutEverywhere />
          </div>
        ) : null}
      </div>
    </>
  );
}
