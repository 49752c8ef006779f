import { useEffect } from 'react';
import { Outlet, useParams } from 'react-router-dom';
import { useSession } from '../features/sign-in/session.ts';
import { rememberSite } from '../lib/last-site.ts';
import { NotFoundPage } from '../pages/NotFoundPage.tsx';

/** Lets through what belongs to a site of the person; any other site is not found. */
export function SiteGate() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const known = site !== undefined;
  useEffect(() => {
    if (known) rememberSite(siteId);
  }, [known, siteId]);
  // The key starts every page afresh at another site: no field keeps a figure of the last one.
  return known ? <Outlet key={siteId} /> : <NotFoundPage />;
}
