import { Navigate } from 'react-router-dom';
import { useSession } from '../features/sign-in/session.ts';
import { lastSite } from '../lib/last-site.ts';
import { NoRolePage } from '../pages/NoRolePage.tsx';
import { paths } from './paths.ts';

/** The first page: Tonight of the site looked at last, or a page that says why there is none. */
export function HomeRedirect() {
  const { sites, installationPermissions } = useSession();
  const site = sites.find((candidate) => candidate.id === lastSite()) ?? sites[0];
  // An administrator reads nothing of a site: what is theirs begins with the sites.
  if (!site && installationPermissions.includes('installation:administer'))
    return <Navigate to={paths.installationSites()} replace />;
  if (!site) return <NoRolePage />;
  return <Navigate to={paths.tonight(site.id)} replace />;
}
