import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { BoardLoading } from '../components/BoardLoading.tsx';
import { ButtonLink } from '../components/Button.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
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

  if (!site.data || !week.data) return <BoardLoading parts={[site, week]} label="Loading the week ahead" rows={6} />;
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
