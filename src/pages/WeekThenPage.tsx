import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { BoardLoading } from '../components/BoardLoading.tsx';
import { Notice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { useSite, useWeekThen } from '../features/week-ahead/queries.ts';
import { WeekView } from '../features/week-ahead/WeekView.tsx';
import { formatDateTime, formatNumber } from '../lib/format.ts';

/** /sites/:siteId/week/:weekOutlookId: a week outlook as it was issued; what is known since is left out. */
export function WeekThenPage() {
  const { siteId = '', weekOutlookId = '' } = useParams();
  useDocumentTitle('The week ahead as it stood');
  const site = useSite(siteId);
  const then = useWeekThen(siteId, weekOutlookId);
  if (!site.data || !then.data) return <BoardLoading parts={[site, then]} label="Loading the week outlook" />;
  const outlook = then.data;
  const { replications } = outlook.result;
  return (
    <>
      <div className="page-pad pt-4">
        <Notice
          kind="caution"
          title={`As it stood on ${formatDateTime(outlook.issuedAt, site.data.timeZone)}. Do not plan by it.`}
        >
          <p>
            {outlook.trigger === 'recomputed'
              ? `Recomputed later from what was known at that time, with ${formatNumber(replications)} replications. `
              : ''}
            What came since is left out.{' '}
            <Link to={paths.weekAhead(siteId)} className="link inline-block min-h-6 font-semibold">
              The week ahead of now
            </Link>{' '}
            <Link to={paths.trackRecord(siteId)} className="link inline-block min-h-6 font-semibold">
              Track record
            </Link>
          </p>
        </Notice>
      </div>
      <WeekView
        week={{
          now: outlook.issuedAt,
          outlook,
          computing: false,
          missing: null,
          cautions: [],
          plan: null,
          past: outlook.past,
          actual: [],
          lastWeek: null,
        }}
        site={site.data}
        then
        refreshError={null}
        emptyActions={null}
        links={null}
        calendarLink={null}
        setLimit={null}
        how={
          <Link to={paths.howNumbersAreMade('week-ahead')} className="link text-quiet font-semibold print:hidden">
            How the numbers are made
          </Link>
        }
      />
    </>
  );
}
