import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { JudgeModel } from '../features/arrival-models/JudgeModel.tsx';
import { ComparisonVerdict } from '../features/arrival-models/ComparisonVerdict.tsx';
import { ModelComparison } from '../features/arrival-models/ModelComparison.tsx';
import { ModelReport } from '../features/arrival-models/ModelReport.tsx';
import { groundsInWords, modelHeadline, sinceFitInWords } from '../features/arrival-models/model-words.ts';
import { useModel } from '../features/arrival-models/queries.ts';
import { JobProgress } from '../features/jobs/JobProgress.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { useServerNow } from '../features/sign-in/use-server-now.ts';
import { formatDateTime } from '../lib/format.ts';

/** /sites/:siteId/models/:modelId */
export function ArrivalModelPage() {
  const { siteId = '', modelId = '' } = useParams();
  const site = useSession().sites.find((candidate) => candidate.id === siteId);
  const now = useServerNow();
  const query = useModel(siteId, modelId);
  const model = query.data;
  const may = (permission: 'arrival-model:fit' | 'arrival-model:approve') =>
    site?.permissions.includes(permission) ?? false;

  if (!model || !site) {
    return (
      // Keyed apart from the page itself, so that nothing of it moves when it arrives.
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Arrival model" title="Arrival model" />
        <div className="page-pad max-w-3xl">
          {query.error ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={6} label="Loading the model" />
          )}
        </div>
      </div>
    );
  }
  return (
    <>
      <PageHead
        tab="Arrival model"
        title={modelHeadline(model, now)}
        lede={<p>{groundsInWords(model, site.timeZone)}.</p>}
        aside={
          <div className="grid gap-0.5">
            {model.fittedAt === null ? null : (
              <div>
                Fitted <b className="text-ink">{formatDateTime(model.fittedAt, site.timeZone)}</b>, {model.fittedBy}
              </div>
            )}
            {model.approvedAt === null ? null : (
              <div>
                Approved <b className="text-ink">{formatDateTime(model.approvedAt, site.timeZone)}</b>,{' '}
                {model.approvedBy}
              </div>
            )}
            {model.refreshedAt === null ? null : (
              <div>Level refreshed {formatDateTime(model.refreshedAt, site.timeZone)}</div>
            )}
            {model.retiredAt === null ? null : <div>Retired {formatDateTime(model.retiredAt, site.timeZone)}</div>}
            {model.reason ? <div className="max-w-80">“{model.reason}”</div> : null}
            <Link to={paths.arrivalModels(siteId)} className="link inline-block min-h-6">
              All models
            </Link>
          </div>
        }
      />
      <div className="page-pad grid grid-cols-[minmax(0,1fr)] gap-8 pt-2">
        {model.status === 'fitting' && model.jobId ? (
          <JobProgress siteId={siteId} jobId={model.jobId} mayCancel={may('arrival-model:fit')} />
        ) : null}
        {model.status === 'failed' ? (
          <Notice kind="caution" title={model.error ?? 'The fit ended without a reason.'}>
            <p>The model in use is unchanged. Mend the cause, then fit another candidate.</p>
          </Notice>
        ) : null}
        {sinceFitInWords(model).length > 0 ? (
          <Notice kind="caution" title="The visits of this model have changed since it was fitted.">
            {sinceFitInWords(model).map((sentence) => (
              <p key={sentence}>{sentence}</p>
            ))}
            <p>Fit a candidate without them, and have it approved in place of this one.</p>
          </Notice>
        ) : null}
        {model.status === 'fitting' || model.status === 'failed' ? null : <ModelReport model={model} />}
        {model.fittedAt === null ? null : (
          <ModelComparison
            siteId={siteId}
            modelId={modelId}
            timeZone={site.timeZone}
            progressOf={(jobId) => <JobProgress siteId={siteId} jobId={jobId} mayCancel={may('arrival-model:fit')} />}
          />
        )}
        {may('arrival-model:approve') ? (
          <JudgeModel siteId={siteId} model={model} beside={<ComparisonVerdict siteId={siteId} modelId={modelId} />} />
        ) : null}
        <p className="text-quiet text-ink2">
          What these figures are and how they are made:{' '}
          <Link to={paths.howNumbersAreMade('arrivals')} className="link font-semibold">
            How the numbers are made
          </Link>
          .
        </p>
      </div>
    </>
  );
}
