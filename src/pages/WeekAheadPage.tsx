import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { useSite, useWeekAhead } from '../features/week-ahead/queries.ts';
import { WeekView } from '../features/week-ahead/WeekView.tsx';

/** /sites/:siteId/week */
export function WeekAheadPage() {
  const { siteId = '' } = useParams();
  useDocumentTitle('Week ahead');
  const permissions = useSession().sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const site = useSite(siteId);
  const week = useWeekAhead(siteId);

  if (!site.data || !week.data) {
    const failed = [site, week].find((query) => query.error && !query.data);
    if (!failed) return <WeekSkeleton />;
    return (
      <div className="page-pad max-w-3xl py-8">
        <ProblemNotice
          error={failed.error}
          retrying={failed.isFetching}
          onRetry={() => {
            void site.refetch();
            void week.refetch();
          }}
        />
      </div>
    );
  }
  return (
    <WeekView
      week={week.data}
      site={site.data}
      refreshError={week.error}
      emptyActions={
        <>
          {permissions.includes('arrival-model:read') ? (
            <ButtonLink to={paths.arrivalModels(siteId)}>Go to Arrival model</ButtonLink>
          ) : null}
          <ButtonLink look="second" to={paths.tonight(siteId)}>
            Go to Tonight
          </ButtonLink>
        </>
      }
      links={
        <>
          <Link to={paths.staffedBeds(siteId)} className="link inline-flex min-h-6 items-center font-bold text-ink">
            Staffed-bed plan
          </Link>
          {permissions.includes('scenario:read') ? (
            <Link to={paths.whatIf(siteId)} className="link inline-flex min-h-6 items-center font-bold text-ink">
              Try a plan
            </Link>
          ) : null}
        </>
      }
      calendarLink={
        permissions.includes('site-settings:edit') ? (
          <>
            Your own days are kept in{' '}
            <Link to={paths.siteSettings(siteId)} className="link font-semibold text-ink">
              Site settings
            </Link>
            .
          </>
        ) : null
      }
      setLimit={
        permissions.includes('site-settings:edit') ? (
          <>
            The limit is kept in{' '}
            <Link to={paths.siteSettings(siteId)} className="link font-semibold text-ink">
              Site settings
            </Link>
            .
          </>
        ) : null
      }
      how={
        <Link to={paths.howNumbersAreMade('week-ahead')} className="link text-quiet font-semibold print:hidden">
          How the numbers are made
        </Link>
      }
    />
  );
}

function WeekSkeleton() {
  return (
    <div className="page-pad min-h-dvh pt-4">
      <Skeleton className="h-11 w-3/5" label="Loading the week ahead" />
      <Skeleton className="mt-3 h-6 w-2/5" />
      <div className="mt-8 grid gap-6">
        {Array.from({ length: 6 }, (_, index) => (
          <div key={index} className="flex gap-6">
            <Skeleton className="h-20 w-gutter shrink-0" />
            <Skeleton className="h-20 flex-1 max-sm:hidden" />
          </div>
        ))}
      </div>
    </div>
  );
}
