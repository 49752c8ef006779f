import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { BoardLoading } from '../components/BoardLoading.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { NightLogPanel } from '../features/outlook/NightLogPanel.tsx';
import { useOutlookThen, useSite } from '../features/outlook/queries.ts';
import { TonightThen } from '../features/outlook/TonightThen.tsx';

/** /sites/:siteId/tonight/:outlookId */
export function TonightThenPage() {
  const { siteId = '', outlookId = '' } = useParams();
  useDocumentTitle('As it stood');
  const site = useSite(siteId);
  const then = useOutlookThen(siteId, outlookId);
  if (!site.data || !then.data) return <BoardLoading parts={[site, then]} label="Loading the outlook" />;
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
