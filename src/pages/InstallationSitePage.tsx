import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { AreaTable } from '../features/installation/AreaTable.tsx';
import { useInstallationSites, usePlaceChoices } from '../features/installation/queries.ts';
import { SitePlaceForm } from '../features/installation/SitePlaceForm.tsx';
import { formatCount } from '../lib/format.ts';
import { NotFoundPage } from './NotFoundPage.tsx';

/** /installation/sites/:installationSiteId: what the administrator sets of a site. */
export function InstallationSitePage() {
  const { installationSiteId } = useParams();
  const sites = useInstallationSites();
  const choices = usePlaceChoices();
  const site = sites.data?.sites.find(({ id }) => id === installationSiteId);
  if (sites.data && !site) return <NotFoundPage />;
  const failed = [sites, choices].find(({ error, data }) => error && !data);
  return (
    <>
      <PageHead
        tab={site?.name ?? 'Site'}
        title={site?.name ?? 'Site'}
        lede={
          site ? (
            <p>
              {formatCount(site.people, 'person holds', 'people hold')} a role here.{' '}
              <Link to={paths.people()} className="link font-semibold">
                Give roles under People
              </Link>
              .
            </p>
          ) : undefined
        }
        aside={
          <Link to={paths.installationSites()} className="link font-semibold">
            All sites
          </Link>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-2">
        {failed ? <ProblemNotice error={failed.error} onRetry={() => void failed.refetch()} /> : null}
        {site && sites.data && choices.data ? (
          <>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="areas">
              <h2 id="areas" className="text-section">
                Care areas
              </h2>
              <AreaTable site={site} />
            </section>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="where">
              <h2 id="where" className="text-section">
                Where it is
              </h2>
              <SitePlaceForm key={site.id} site={site} groups={sites.data.groups} choices={choices.data} />
            </section>
          </>
        ) : failed ? null : (
          <SkeletonLines lines={6} label="Loading the site" />
        )}
      </div>
    </>
  );
}
