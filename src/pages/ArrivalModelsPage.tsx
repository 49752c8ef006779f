import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { FitModel } from '../features/arrival-models/FitModel.tsx';
import { ModelList } from '../features/arrival-models/ModelList.tsx';
import { useModels } from '../features/arrival-models/queries.ts';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { periodInWords } from '../features/visit-logs/log-words.ts';
import { useVisitLogs } from '../features/visit-logs/queries.ts';
import { formatAge } from '../lib/format.ts';
import { useServerNow } from '../features/sign-in/use-server-now.ts';

/** /sites/:siteId/models */
export function ArrivalModelsPage() {
  const { siteId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const now = useServerNow();
  const models = useModels(siteId);
  const mayFit = site?.permissions.includes('arrival-model:fit') ?? false;
  const logs = useVisitLogs(siteId, mayFit && (site?.permissions.includes('visit-log:read') ?? false));

  if (!models.data || !site) {
    return (
      // Keyed apart from the page itself, so that nothing of it moves when it arrives.
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Arrival model" title="Arrival model" />
        <div className="page-pad max-w-3xl">
          {models.error ? (
            <ProblemNotice error={models.error} onRetry={() => void models.refetch()} retrying={models.isFetching} />
          ) : (
            <SkeletonLines lines={4} label="Loading the models" />
          )}
        </div>
      </div>
    );
  }
  const list = models.data.models;
  const inUse = list.find((model) => model.status === 'in use');
  const candidate = list.find((model) => model.status === 'candidate');
  const title = inUse?.fittedAt
    ? `The model in use was fitted ${formatAge(now - inUse.fittedAt)} ago.`
    : 'No arrival model is in use.';
  const lede = inUse
    ? candidate
      ? 'A candidate waits for approval by an operations manager who did not fit it.'
      : 'Its level refreshes itself when a log lands; a change of structure needs a new candidate and its approval.'
    : candidate
      ? 'Tonight has no outlook until an operations manager who did not fit the candidate approves it.'
      : 'Tonight has no outlook until a model is fitted on accepted visit logs and approved.';

  return (
    <>
      <PageHead tab="Arrival model" title={title} lede={<p className="max-w-[58rem]">{lede}</p>} />
      <div className="page-pad grid grid-cols-[minmax(0,1fr)] gap-6 pt-2">
        {mayFit ? (
          <FitModel
            siteId={siteId}
            readyLogs={models.data.readyLogs}
            fitting={list.some((model) => model.status === 'fitting')}
            logs={(logs.data ?? [])
              .filter(({ status }) => status === 'ready')
              .map(({ id, period, fileName }) => ({
                id,
                label: `${periodInWords(period, site.timeZone)}, ${fileName}`,
              }))}
            loadLog={
              site.permissions.includes('visit-log:upload') ? (
                <ButtonLink to={paths.newVisitLog(siteId)}>Load a visit log</ButtonLink>
              ) : null
            }
          />
        ) : null}
        <ModelList
          models={list}
          timeZone={site.timeZone}
          hrefOf={(modelId) => paths.arrivalModel(siteId, modelId)}
          progressOf={(jobId) => <JobProgress siteId={siteId} jobId={jobId} mayCancel={mayFit} />}
          empty="No model was ever fitted here."
        />
      </div>
    </>
  );
}
