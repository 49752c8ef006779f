import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { NightLogPanel } from '../features/outlook/NightLogPanel.tsx';
import { TonightView } from '../features/outlook/TonightView.tsx';
import { useTonightParts } from '../features/outlook/use-tonight-parts.ts';
import { useSession } from '../features/sign-in/session.ts';

/** /sites/:siteId/tonight */
export function TonightPage() {
  const { siteId = '' } = useParams();
  useDocumentTitle('Tonight');
  const session = useSession();
  const permissions = session.sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const loading = useTonightParts(session.person.id, siteId, session.keptAt !== undefined);
  const { parts } = loading;

  if (!parts) {
    if (!loading.error) return <TonightSkeleton />;
    return (
      <div className="page-pad max-w-3xl py-8">
        <ProblemNotice error={loading.error} retrying={loading.fetching} onRetry={loading.refetch} />
      </div>
    );
  }
  return (
    <TonightView
      tonight={parts.tonight}
      loadedAt={loading.loadedAt}
      site={parts.site}
      census={parts.census ?? undefined}
      rights={{
        enterCensus: permissions.includes('census:enter'),
        changeBeds: permissions.includes('staffed-beds:change-now'),
        acknowledge: permissions.includes('risk:acknowledge'),
      }}
      stale={
        loading.fromDevice || loading.refreshError
          ? { error: loading.refreshError, fromDevice: loading.fromDevice }
          : null
      }
      howHref={paths.howNumbersAreMade()}
      nightLog={
        <PanelBoundary>
          <NightLogPanel site={parts.site} />
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
