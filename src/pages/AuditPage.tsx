import { useParams, useSearchParams } from 'react-router-dom';
import { Button } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { AuditFilters } from '../features/audit-log/AuditFilters.tsx';
import { AuditList } from '../features/audit-log/AuditList.tsx';
import { ChainLine } from '../features/audit-log/ChainLine.tsx';
import { auditExportAddress, useAuditEvents, type AuditFilter } from '../features/audit-log/queries.ts';
import { useSession } from '../features/sign-in/session.ts';

const parts = ['event', 'actor', 'from', 'until', 'site'] as const;

/** /audit: everything, the administrator's; /sites/:siteId/audit: the site's, the operations manager's. */
export function AuditPage() {
  const { siteId = null } = useParams();
  const site = useSession().sites.find(({ id }) => id === siteId);
  const timeZone = site?.timeZone ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
  const [search, setSearch] = useSearchParams();
  const filter = Object.fromEntries(parts.map((part) => [part, search.get(part) ?? ''])) as unknown as AuditFilter;
  const before = search.get('before') ?? '';
  const query = useAuditEvents(siteId, filter, before, timeZone);
  const show = (next: AuditFilter, from: number | null = null) => {
    const address = new URLSearchParams();
    for (const part of parts) if (next[part] !== '') address.set(part, next[part]);
    if (from !== null) address.set('before', String(from));
    setSearch(address);
  };
  const older = query.data?.before ?? null;
  return (
    <>
      <PageHead
        tab="Audit trail"
        title={site ? `What was done at ${site.name}` : 'What was done, by whom, when'}
        lede={
          <p className="max-w-[58rem]">
            Rows are only ever added. Each carries the digest of the one before it, so that an altered or removed row
            shows.
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-6 pt-2">
        <ChainLine siteId={siteId} timeZone={timeZone} />
        <AuditFilters
          key={search.toString()}
          filter={filter}
          sites={query.data?.sites ?? []}
          onFilter={(next) => show(next)}
        />
        {query.error ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={8} label="Loading the trail" /> : null}
        {query.data ? (
          <>
            <AuditList siteId={siteId} events={query.data.events} timeZone={timeZone} />
            <div className="flex flex-wrap items-center gap-x-6 gap-y-2">
              {before !== '' ? (
                <Button look="second" onClick={() => show(filter)}>
                  Newest
                </Button>
              ) : null}
              {older !== null ? (
                <Button
                  look="second"
                  busy={query.isPlaceholderData}
                  busyText="Loading…"
                  onClick={() => show(filter, older)}
                >
                  Older
                </Button>
              ) : null}
              <a
                href={auditExportAddress(siteId, filter, timeZone)}
                download="audit-trail.csv"
                className="link inline-flex min-h-11 items-center font-semibold"
              >
                Save what fits as CSV, with its digests
              </a>
            </div>
          </>
        ) : null}
      </div>
    </>
  );
}
