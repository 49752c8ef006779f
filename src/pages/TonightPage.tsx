import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { NightLogPanel } from '../features/outlook/NightLogPanel.tsx';
import { useCensus, useSite, useTonight } from '../features/outlook/queries.ts';
import { TonightView } from '../features/outlook/TonightView.tsx';
import { useSession } from '../features/sign-in/session.ts';

/** /sites/:siteId/tonight */
export function TonightPage() {
  const { siteId = '' } = useParams();
  useDocumentTitle('Tonight');
  const permissions = useSession().sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const site = useSite(siteId);
  const tonight = useTonight(siteId);
  const census = useCensus(siteId);

  if (!site.data || !tonight.data || (!census.data && !census.error)) {
    const failed = [site, tonight].find((query) => query.error && !query.data);
    if (failed) {
      return (
        <div className="page-pad max-w-3xl py-8">
          <ProblemNotice
            error={failed.error}
            retrying={failed.isFetching}
            onRetry={() => {
              void site.refetch();
              void tonight.refetch();
              void census.refetch();
            }}
          />
        </div>
      );
    }
    return <TonightSkeleton />;
  }
  return (
    <TonightView
      tonight={tonight.data}
      loadedAt={tonight.dataUpdatedAt}
      site={site.data}
      census={census.data}
      rights={{
        enterCensus: permissions.includes('census:enter'),
        changeBeds: permissions.includes('staffed-beds:change-now'),
        acknowledge: permissions.includes('risk:acknowledge'),
      }}
      refreshError={tonight.error}
      howHref={paths.howNumbersAreMade()}
      nightLog={
        <PanelBoundary>
          <NightLogPanel site={site.data} />
        </PanelBoundary>
      }
      emptyActions={
        <>
          {permissions.includes('arrival-model:read') ? (
            <ButtonLink to={paths.arrivalModels(siteId)}>Go to Arrival model</ButtonLink>
          ) : null}
          {permissions.includes('visit-log:upload') ? (
            <ButtonLink look="second" to={paths.newVisitLog(siteId)}>
              Load a visit log
            </ButtonLink>
          ) : null}
        </>
      }
    />
  );
}

function TonightSkeleton() {
  return (
    <div className="page-pad min-h-dvh pt-4">
      <Skeleton className="h-11 w-3/5" label="Loading tonight" />
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
