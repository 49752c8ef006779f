import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { ColumnGuide } from '../features/visit-logs/ColumnGuide.tsx';
import { useSite } from '../features/visit-logs/queries.ts';

/** /sites/:siteId/logs/guide */
export function VisitLogGuidePage() {
  const { siteId = '' } = useParams();
  const site = useSite(siteId);
  return (
    <>
      <PageHead
        tab="Columns of a visit log"
        title="What a visit log holds."
        lede={<p className="max-w-[58rem]">Columns, formats, times, what is refused, and an empty file to fill.</p>}
        aside={
          <Link to={paths.visitLogs(siteId)} className="link inline-block min-h-6">
            All logs
          </Link>
        }
      />
      <div className="page-pad pt-2">
        {site.error ? (
          <ProblemNotice error={site.error} onRetry={() => void site.refetch()} retrying={site.isFetching} />
        ) : null}
        {site.isPending ? <SkeletonLines lines={6} label="Loading the site’s care areas" /> : null}
        {site.data ? <ColumnGuide areas={site.data.areas} /> : null}
      </div>
    </>
  );
}
