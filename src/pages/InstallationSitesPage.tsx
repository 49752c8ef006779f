import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { HealthGroups } from '../features/installation/HealthGroups.tsx';
import { useInstallationSites } from '../features/installation/queries.ts';
import { SiteList } from '../features/installation/SiteList.tsx';
import { formatCount } from '../lib/format.ts';

/** /installation/sites: every site and group; the administrator's. */
export function InstallationSitesPage() {
  const query = useInstallationSites();
  const { data } = query;
  return (
    <>
      <PageHead
        tab="Sites"
        title={data ? (data.sites.length === 0 ? 'No site yet' : formatCount(data.sites.length, 'site')) : 'Sites'}
        lede={
          <p className="max-w-[58rem]">
            A site is one emergency department with its care areas. What it decides for itself (shifts, limits, staffed
            beds, calendar) is its operations manager’s.
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-2">
        {query.error && !data ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={4} label="Loading the list of sites" /> : null}
        {data ? (
          <>
            <section aria-label="Sites" className="grid grid-cols-1 gap-4">
              <SiteList sites={data.sites} />
              {data.groups.length > 0 ? (
                <div>
                  <ButtonLink to={paths.newSite()}>Make a site</ButtonLink>
                </div>
              ) : null}
            </section>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="groups">
              <h2 id="groups" className="text-section">
                Health groups
              </h2>
              <HealthGroups groups={data.groups} />
            </section>
          </>
        ) : null}
      </div>
    </>
  );
}
