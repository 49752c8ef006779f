import { Link, useParams, useSearchParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { CalendarFeedPanel } from '../features/calendar-feeds/CalendarFeedPanel.tsx';
import { useScenarios, useWhatIf } from '../features/scenarios/queries.ts';
import { WhatIfView } from '../features/scenarios/WhatIfView.tsx';
import { useSession } from '../features/sign-in/session.ts';

/** /sites/:siteId/what-if?plan=…&plan=… */
export function WhatIfPage() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const [search, setSearch] = useSearchParams();
  const whatIf = useWhatIf(siteId);
  const plans = useScenarios(siteId);
  const may = (
    permission: 'scenario:read' | 'scenario:save' | 'staffed-beds:plan' | 'site-settings:edit' | 'arrival-model:read',
  ) => site?.permissions.includes(permission) ?? false;

  if (site && !may('scenario:read')) {
    return (
      <>
        <PageHead tab="What if" title="What if" />
        <div className="page-pad max-w-3xl">
          <Notice title="Your roles at this site do not include plans.">
            <p>Charge nurses, operations managers and data stewards read them. Ask the administrator if you should.</p>
          </Notice>
        </div>
      </>
    );
  }
  if (!site || !whatIf.data || !plans.data) {
    const failed = [whatIf, plans].find((query) => query.error && !query.data);
    return (
      <div key="loading" className="min-h-dvh">
        <PageHead tab="What if" title="What if" />
        <div className="page-pad max-w-3xl">
          {failed ? (
            <ProblemNotice
              error={failed.error}
              retrying={failed.isFetching}
              onRetry={() => {
                void whatIf.refetch();
                void plans.refetch();
              }}
            />
          ) : (
            <SkeletonLines lines={8} label="Loading the week as it stands" />
          )}
        </div>
      </div>
    );
  }
  const { basis, missing, cautions } = whatIf.data;
  if (!basis) {
    return (
      <>
        <PageHead tab="What if" title="There is nothing to try a plan against yet." lede={<p>{missing?.reason}</p>} />
        <div className="page-pad grid max-w-3xl justify-items-start gap-4">
          <p className="text-ink2">{missing?.next}</p>
          {may('arrival-model:read') ? (
            <ButtonLink to={paths.arrivalModels(siteId)}>Go to Arrival model</ButtonLink>
          ) : null}
        </div>
      </>
    );
  }
  return (
    <WhatIfView
      site={site}
      basis={basis}
      cautions={cautions}
      plans={plans.data}
      opened={search.getAll('plan')}
      rights={{ save: may('scenario:save'), adopt: may('staffed-beds:plan') }}
      feed={
        may('site-settings:edit') ? (
          <PanelBoundary>
            <CalendarFeedPanel siteId={siteId} timeZone={site.timeZone} />
          </PanelBoundary>
        ) : null
      }
      howLink={
        <Link to={paths.howNumbersAreMade('what-if')} className="link font-semibold">
          How a plan is answered
        </Link>
      }
      onOpened={(ids) => {
        const next = new URLSearchParams(search);
        next.delete('plan');
        for (const id of ids) next.append('plan', id);
        setSearch(next, { replace: true, preventScrollReset: true });
      }}
    />
  );
}
