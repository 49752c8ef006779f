import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatCount, formatTime } from '../../lib/format.ts';
import { useAuditChain } from './queries.ts';

/** Says whether a row of the trail was altered or removed. */
export function ChainLine({ siteId, timeZone }: { siteId: string | null; timeZone: string }) {
  const query = useAuditChain(siteId);
  if (query.error && !query.data) {
    return <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />;
  }
  if (!query.data) return <SkeletonLines lines={1} label="Checking the chain" />;
  const { whole, rows, head, fault, checkedAt } = query.data;
  if (!whole) {
    return (
      <Notice
        kind="caution"
        live
        title={`The trail is not whole: ${fault?.kind ?? ''} at row ${String(fault?.eventId)}.`}
      >
        <p>
          Somebody changed the database other than through Shoalmark, or a file was damaged. Keep the file as it is,
          tell whoever is responsible for information security, and compare with the newest backup.
        </p>
      </Notice>
    );
  }
  return (
    <p className="text-side text-ink2">
      <b className="text-ink">Chain verified</b> at {formatTime(checkedAt, timeZone)}: {formatCount(rows, 'row')} of the
      installation, none altered, none removed. Newest digest{' '}
      <code className="break-all">
        {head.slice(0, 16)}…{head.slice(-8)}
      </code>
    </p>
  );
}
