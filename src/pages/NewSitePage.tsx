import { Link, useNavigate } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { NewSiteForm } from '../features/installation/NewSiteForm.tsx';
import { useInstallationSites, usePlaceChoices } from '../features/installation/queries.ts';

/** /installation/sites/new */
export function NewSitePage() {
  const sites = useInstallationSites();
  const choices = usePlaceChoices();
  const navigate = useNavigate();
  const failed = [sites, choices].find(({ error }) => error);
  return (
    <>
      <PageHead
        tab="New site"
        title="A new site"
        lede={<p>One emergency department. It begins with two shifts of twelve hours, which it then sets itself.</p>}
        aside={
          <Link to={paths.installationSites()} className="link font-semibold">
            All sites
          </Link>
        }
      />
      <div className="page-pad pt-2">
        {failed ? <ProblemNotice error={failed.error} onRetry={() => void failed.refetch()} /> : null}
        {sites.data && choices.data ? (
          sites.data.groups.length === 0 ? (
            <p>
              Make the health group first, under{' '}
              <Link to={paths.installationSites()} className="link font-semibold">
                Sites
              </Link>
              .
            </p>
          ) : (
            <NewSiteForm
              groups={sites.data.groups}
              choices={choices.data}
              // After the guard of unsaved work has seen that the site is made.
              onMade={(site) => setTimeout(() => void navigate(paths.installationSite(site.id)))}
            />
          )
        ) : failed ? null : (
          <SkeletonLines lines={6} label="Loading the form" />
        )}
      </div>
    </>
  );
}
