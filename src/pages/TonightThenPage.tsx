import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { NightLogPanel } from '../features/outlook/NightLogPanel.tsx';
import { useOutlookThen, useSite } from '../features/outlook/queries.ts';
import { TonightThen } from '../features/outlook/TonightThen.tsx';

/** /sites/:siteId/tonight/:outlookId */
export function TonightThenPage() {
  const { siteId = '', outlookId = '' } = useParams();
  useDocumentTitle('As it stood');
  const site = useSite(siteId);
  const then = useOutlookThen(siteId, outlookId);
  const failed = [site, then].find((query) => query.error && !query.isPlaceholderData);
  if (failed) {
    return (
      <div className="page-pad max-w-3xl py-8">
        <ProblemNotice
          error={failed.error}
          retrying={failed.isFetching}
          onRetry={() => {
            void site.refetch();
            void then.refetch();
          }}
        />
      </div>
    );
  }
  if (!site.data || !then.data) {
    return (
      <div className="page-pad min-h-dvh pt-4">
        <Skeleton className="h-11 w-3/5" label="Loading the outlook" />
        <Skeleton className="mt-3 h-6 w-2/5" />
      </div>
    );
  }
  const { outlook } = then.data;
  return (
    <div aria-busy={then.isPlaceholderData || undefined}>
      <TonightThen key={outlook.id} then={then.data} site={site.data} howHref={paths.howNumbersAreMade()} />
      <PanelBoundary>
        <NightLogPanel site={site.data} at={outlook.issuedAt} current={outlook.id} />
      </PanelBoundary>
    </div>
  );
}
