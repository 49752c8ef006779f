import { useState } from 'react';
import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { Button, ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { HandoverSheet } from '../features/outlook/HandoverSheet.tsx';
import { useNightLog } from '../features/outlook/queries.ts';
import { StaleNote } from '../features/outlook/StaleNote.tsx';
import { useTonightParts } from '../features/outlook/use-tonight-parts.ts';
import { useSession } from '../features/sign-in/session.ts';

/** /sites/:siteId/handover */
export function HandoverPage() {
  const { siteId = '' } = useParams();
  const [openedAt] = useState(() => Date.now());
  useDocumentTitle('Handover sheet');
  const session = useSession();
  const permissions = session.sites.find((candidate) => candidate.id === siteId)?.permissions ?? [];
  const loading = useTonightParts(session.person.id, siteId, session.keptAt !== undefined);
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
  const { parts } = loading;
  if (loading.error) {
    return (
      <div className="page-pad max-w-3xl py-8">
        <ProblemNotice
          error={loading.error}
          retrying={loading.fetching}
          onRetry={() => {
            loading.refetch();
            void log.refetch();
          }}
        />
      </div>
    );
  }
  if (!parts || (!log.data && !log.error && !loading.fromDevice)) {
    return (
      <div className="page-pad min-h-dvh pt-4">
        <Skeleton className="h-11 w-3/5" label="Loading the handover sheet" />
        <Skeleton className="mt-3 h-80 w-full" />
      </div>
    );
  }
  const { outlook, missing } = parts.tonight;
  // Ages on the sheet grow on: an older state must not print as if it were of this minute.
  const tonight = {
    ...parts.tonight,
    now: parts.tonight.now + Math.max(0, Math.floor((openedAt - loading.loadedAt) / 1000)),
  };
  return (
    <div className="page-pad pt-3">
      <div className="mb-4 flex flex-wrap items-center gap-4 print:hidden">
        {outlook ? <Button onClick={() => window.print()}>Print</Button> : null}
        <ButtonLink look="second" to={paths.tonight(siteId)}>
          Back to Tonight
        </ButtonLink>
      </div>
      {outlook && (loading.fromDevice || loading.refreshError) ? (
        <StaleNote
          className="mb-4"
          issuedAt={outlook.issuedAt}
          now={tonight.now}
          timeZone={parts.site.timeZone}
          error={loading.refreshError}
          fromDevice={loading.fromDevice}
        />
      ) : null}
      {outlook ? (
        <HandoverSheet tonight={tonight} outlook={outlook} site={parts.site} log={log.data ?? null} />
      ) : (
        <Notice kind="caution" title="There is no outlook to hand over.">
          <p>{missing?.next}</p>
        </Notice>
      )}
    </div>
  );
}
