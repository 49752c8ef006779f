import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { Button, ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { HandoverSheet } from '../features/outlook/HandoverSheet.tsx';
import { useNightLog, useSite, useTonight } from '../features/outlook/queries.ts';
import { useSession } from '../features/sign-in/session.ts';

/** /sites/:siteId/handover */
export function HandoverPage() {
  const { siteId = '' } = useParams();
  useDocumentTitle('Handover sheet');
  const permissions = useSession().sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const site = useSite(siteId);
  const tonight = useTonight(siteId);
  const log = useNightLog(siteId);

  if (!permissions.includes('risk:acknowledge')) {
    return (
      <div className="page-pad max-w-3xl py-8">
        <Notice title="The handover sheet is for charge nurses and operations managers.">
          <p>Ask the administrator for the role if you hand over here.</p>
        </Notice>
      </div>
    );
  }
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
            void log.refetch();
          }}
        />
      </div>
    );
  }
  if (!site.data || !tonight.data || (!log.data && !log.error)) {
    return (
      <div className="page-pad min-h-dvh pt-4">
        <Skeleton className="h-11 w-3/5" label="Loading the handover sheet" />
        <Skeleton className="mt-3 h-80 w-full" />
      </div>
    );
  }
  const { outlook, missing } = tonight.data;
  return (
    <div className="page-pad pt-3">
      <div className="mb-4 flex flex-wrap items-center gap-4 print:hidden">
        {outlook ? <Button onClick={() => window.print()}>Print</Button> : null}
        <ButtonLink look="second" to={paths.tonight(siteId)}>
          Back to Tonight
        </ButtonLink>
      </div>
      {tonight.error ? (
        <Notice kind="caution" className="mb-4 print:hidden" title="The newest figures could not be loaded." live>
          <p>This sheet shows what was loaded last.</p>
        </Notice>
      ) : null}
      {outlook ? (
        <HandoverSheet tonight={tonight.data} outlook={outlook} site={site.data} log={log.data ?? null} />
      ) : (
        <Notice kind="caution" title="There is no outlook to hand over.">
          <p>{missing?.next}</p>
        </Notice>
      )}
    </div>
  );
}
