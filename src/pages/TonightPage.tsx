import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { BoardSkeleton } from '../components/BoardLoading.tsx';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
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
    if (!loading.error) return <BoardSkeleton label="Loading tonight" rows={6} />;
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
          {permissions.includes('staffed-beds:plan') && parts.tonight.missing?.reason === 'no staffed-bed plan' ? (
            <ButtonLink to={paths.staffedBeds(siteId)}>Go to Staffed beds</ButtonLink>
          ) : permissions.includes('arrival-model:read') ? (
            <ButtonLink to={paths.arrivalModels(siteId)}>Go to Arrival model</ButtonLink>
          ) : null}
          {permissions.includes('visit-log:upload') && parts.tonight.missing?.reason === 'no model' ? (
            <ButtonLink look="second" to={paths.newVisitLog(siteId)}>
              Load a visit log
            </ButtonLink>
          ) : null}
        </>
      }
    />
  );
}
