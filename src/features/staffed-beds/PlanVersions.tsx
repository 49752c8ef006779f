import type { PlanVersion } from '../../../shared/api/staffed-beds.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { comparePlans } from '../../../shared/domain/compare-plans.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatCount, formatDateTime } from '../../lib/format.ts';
import { bedHoursInWords, ChangeTable } from './ChangeTable.tsx';
import { usePlanVersion, usePlanVersions } from './queries.ts';

function Comparison({ site, version }: { site: Site; version: number }) {
  const after = usePlanVersion(site.id, version);
  const before = usePlanVersion(site.id, version > 1 ? version - 1 : null);
  const failed = after.isError ? after : before.isError ? before : null;
  if (failed) return <ProblemNotice error={failed.error} onRetry={() => void failed.refetch()} />;
  if (!after.data || (version > 1 && !before.data)) return <SkeletonLines lines={3} label="Loading the two versions" />;
  const changes = comparePlans(before.data?.areas ?? [], after.data.areas);
  return (
    <ChangeTable
      caption={
        version === 1
          ? 'Version 1, the first'
          : `Version ${String(version)} against version ${String(version - 1)}: ${formatCount(changes.length, 'change')}, ${bedHoursInWords(changes)}`
      }
      changes={changes}
      nameOf={(id) => site.areas.find((area) => area.id === id)?.name ?? 'An area of earlier'}
    />
  );
}

/** Every version with who, when and why, and what one changed beside the one before it. */
export function PlanVersions({
  site,
  compared,
  onCompare,
}: {
  site: Site;
  /** The version that is open against its previous one. */
  compared: number | null;
  onCompare: (version: number | null) => void;
}) {
  const query = usePlanVersions(site.id);
  return (
    <section className="grid grid-cols-1 gap-4" aria-labelledby="versions">
      <h2 id="versions" className="text-section">
        Versions
      </h2>
      {query.isError && !query.data ? (
        <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
      ) : null}
      {query.isPending ? <SkeletonLines lines={3} label="Loading the versions" /> : null}
      {query.data ? (
        <DataTable<PlanVersion>
          caption="Versions of the plan, newest first"
          captionHidden
          rows={query.data.versions}
          rowKey={({ version }) => String(version)}
          empty="No version was saved yet. Fill the grid above and save it."
          columns={[
            {
              key: 'version',
              header: 'Version',
              rowHeader: true,
              cell: ({ version }) =>
                `${String(version)}${version === query.data.versions[0].version ? ', in force' : ''}`,
            },
            { key: 'at', header: 'Saved', cell: ({ savedAt }) => formatDateTime(savedAt, site.timeZone) },
            { key: 'by', header: 'By', cell: ({ savedBy }) => savedBy },
            { key: 'why', header: 'Reason', cell: ({ reason }) => reason },
            {
              key: 'compare',
              header: 'Difference',
              cell: ({ version }) => (
                <Button
                  look="quiet"
                  aria-expanded={compared === version}
                  aria-label={
                    version === 1 ? 'Show version 1' : `Compare version ${String(version)} with the one before it`
                  }
                  onClick={() => onCompare(compared === version ? null : version)}
                >
                  {compared === version ? 'Close' : version === 1 ? 'Show' : 'Compare'}
                </Button>
              ),
            },
          ]}
        />
      ) : null}
      {compared === null ? null : <Comparison site={site} version={compared} />}
    </section>
  );
}
