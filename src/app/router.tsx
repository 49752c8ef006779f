import { createBrowserRouter } from 'react-router-dom';
import { ErrorPage } from './ErrorPage.tsx';
import { HomeRedirect } from './HomeRedirect.tsx';
import { Shell } from './Shell.tsx';
import { SignInGate } from './SignInGate.tsx';
import { SiteGate } from './SiteGate.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { NotFoundPage } from '../pages/NotFoundPage.tsx';
import { SignInPage } from '../pages/SignInPage.tsx';

function PageSkeleton() {
  return (
    <div className="page-pad min-h-dvh pt-4">
      <Skeleton className="h-11 w-3/5" label="Loading the page" />
      <Skeleton className="mt-3 h-6 w-2/5" />
    </div>
  );
}

/** Every address of the client. Each page is its own chunk. */
export function makeRouter() {
  return createBrowserRouter([
    { path: '/sign-in', element: <SignInPage />, errorElement: <ErrorPage /> },
    {
      element: <SignInGate />,
      errorElement: <ErrorPage />,
      hydrateFallbackElement: <PageSkeleton />,
      children: [
        { path: '/', element: <HomeRedirect /> },
        {
          element: <Shell />,
          errorElement: <ErrorPage />,
          children: [
            {
              path: '/sites/:siteId',
              element: <SiteGate />,
              errorElement: <ErrorPage />,
              children: [
                {
                  path: 'tonight',
                  lazy: async () => ({ Component: (await import('../pages/TonightPage.tsx')).TonightPage }),
                },
                {
                  path: 'tonight/:outlookId',
                  lazy: async () => ({ Component: (await import('../pages/TonightThenPage.tsx')).TonightThenPage }),
                },
                {
                  path: 'week',
                  lazy: async () => ({ Component: (await import('../pages/WeekAheadPage.tsx')).WeekAheadPage }),
                },
                {
                  path: 'week/:weekOutlookId',
                  lazy: async () => ({ Component: (await import('../pages/WeekThenPage.tsx')).WeekThenPage }),
                },
                {
                  path: 'what-if',
                  lazy: async () => ({ Component: (await import('../pages/WhatIfPage.tsx')).WhatIfPage }),
                },
                {
                  path: 'track-record',
                  lazy: async () => ({ Component: (await import('../pages/TrackRecordPage.tsx')).TrackRecordPage }),
                },
                {
                  path: 'handover',
                  lazy: async () => ({ Component: (await import('../pages/HandoverPage.tsx')).HandoverPage }),
                },
                {
                  path: 'beds',
                  lazy: async () => ({ Component: (await import('../pages/StaffedBedsPage.tsx')).StaffedBedsPage }),
                },
                {
                  path: 'settings',
                  lazy: async () => ({ Component: (await import('../pages/SiteSettingsPage.tsx')).SiteSettingsPage }),
                },
                {
                  path: 'logs',
                  lazy: async () => ({ Component: (await import('../pages/VisitLogsPage.tsx')).VisitLogsPage }),
                },
                {
                  path: 'logs/new',
                  lazy: async () => ({ Component: (await import('../pages/NewVisitLogPage.tsx')).NewVisitLogPage }),
                },
                {
                  path: 'logs/guide',
                  lazy: async () => ({ Component: (await import('../pages/VisitLogGuidePage.tsx')).VisitLogGuidePage }),
                },
                {
                  path: 'logs/:logId',
                  lazy: async () => ({ Component: (await import('../pages/VisitLogPage.tsx')).VisitLogPage }),
                },
                {
                  path: 'models',
                  lazy: async () => ({ Component: (await import('../pages/ArrivalModelsPage.tsx')).ArrivalModelsPage }),
                },
                {
                  path: 'models/:modelId',
                  lazy: async () => ({ Component: (await import('../pages/ArrivalModelPage.tsx')).ArrivalModelPage }),
                },
                {
                  path: 'briefs',
                  lazy: async () => ({ Component: (await import('../pages/BriefsPage.tsx')).BriefsPage }),
                },
                {
                  path: 'briefs/:briefId',
                  lazy: async () => ({ Component: (await import('../pages/BriefPage.tsx')).BriefPage }),
                },
                {
                  path: 'tokens',
                  lazy: async () => ({ Component: (await import('../pages/TokensPage.tsx')).TokensPage }),
                },
                {
                  path: 'audit',
                  lazy: async () => ({ Component: (await import('../pages/AuditPage.tsx')).AuditPage }),
                },
                { path: '*', element: <NotFoundPage /> },
              ],
            },
            {
              path: '/tokens',
              lazy: async () => ({ Component: (await import('../pages/TokensPage.tsx')).TokensPage }),
            },
            {
              path: '/installation/sites',
              lazy: async () => ({
                Component: (await import('../pages/InstallationSitesPage.tsx')).InstallationSitesPage,
              }),
            },
            {
              path: '/installation/sites/new',
              lazy: async () => ({ Component: (await import('../pages/NewSitePage.tsx')).NewSitePage }),
            },
            {
              path: '/installation/sites/:installationSiteId',
              lazy: async () => ({
                Component: (await import('../pages/InstallationSitePage.tsx')).InstallationSitePage,
              }),
            },
            {
              path: '/status',
              lazy: async () => ({ Component: (await import('../pages/ServerStatusPage.tsx')).ServerStatusPage }),
            },
            {
              path: '/sessions',
              lazy: async () => ({ Component: (await import('../pages/OwnSessionsPage.tsx')).OwnSessionsPage }),
            },
            {
              path: '/people',
              lazy: async () => ({ Component: (await import('../pages/PeoplePage.tsx')).PeoplePage }),
            },
            {
              path: '/people/:personId',
              lazy: async () => ({ Component: (await import('../pages/PersonPage.tsx')).PersonPage }),
            },
            {
              path: '/audit',
              lazy: async () => ({ Component: (await import('../pages/AuditPage.tsx')).AuditPage }),
            },
            ...(import.meta.env.DEV
              ? [
                  {
                    path: '/parts',
                    lazy: async () => ({ Component: (await import('../pages/PartsPage.tsx')).PartsPage }),
                  },
                ]
              : []),
            {
              path: '/how',
              lazy: async () => ({
                Component: (await import('../pages/HowNumbersAreMadePage.tsx')).HowNumbersAreMadePage,
              }),
            },
            { path: '*', element: <NotFoundPage /> },
          ],
        },
      ],
    },
  ]);
}
