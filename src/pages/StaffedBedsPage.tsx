import { useParams, useSearchParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { useServerNow } from '../features/sign-in/use-server-now.ts';
import { Exceptions } from '../features/staffed-beds/Exceptions.tsx';
import { plannedOf } from '../features/staffed-beds/plan-draft.ts';
import { PlanEditor } from '../features/staffed-beds/PlanEditor.tsx';
import { planSentence } from '../features/staffed-beds/plan-sentence.ts';
import { PlanVersions } from '../features/staffed-beds/PlanVersions.tsx';
import { useRequiredBeds, useSite, useStaffedBeds } from '../features/staffed-beds/queries.ts';
import { requiredCells } from '../features/staffed-beds/required-cells.ts';
import { formatAge, formatDateTime } from '../lib/format.ts';

/** /sites/:siteId/beds: the staffed-bed plan. `?halfHours` names the area that is open, `?compare` the version. */
export function StaffedBedsPage() {
  const { siteId = '' } = useParams();
  const [search, setSearch] = useSearchParams();
  const permissions = useSession().sites.find(({ id }) => id === siteId)?.permissions ?? [];
  const now = useServerNow();
  const site = useSite(siteId);
  const beds = useStaffedBeds(siteId);
  const required = useRequiredBeds(siteId);
  const setParameter = (name: string, value: string | null) =>
    setSearch(
      (current) => {
        const next = new URLSearchParams(current);
        if (value === null) next.delete(name);
        else next.set(name, value);
        return next;
      },
      { replace: true, preventScrollReset: true },
    );

  if (!site.data || !beds.data) {
    const failed = site.isError ? site : beds.isError ? beds : null;
    return (
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Staffed beds" title="Staffed beds" />
        <div className="page-pad max-w-3xl">
          {failed ? (
            <ProblemNotice error={failed.error} onRetry={() => void failed.refetch()} retrying={failed.isFetching} />
          ) : (
            <SkeletonLines lines={8} label="Loading the staffed-bed plan" />
          )}
        </div>
      </div>
    );
  }
  const { plan, changes } = beds.data;
  const mayEdit = permissions.includes('staffed-beds:plan');
  const compared = /^\d{1,6}$/.test(search.get('compare') ?? '') ? Number(search.get('compare')) : null;
  const cells = required.data?.issuedAt ? requiredCells(required.data, site.data.shifts, site.data.timeZone) : null;
  const areaIds = site.data.areas.map(({ id }) => id);
  const risk = `${String(Math.round((required.data?.planningRisk ?? site.data.planningRisk) * 100))} %`;
  return (
    <>
      <PageHead
        tab="Staffed beds"
        title={plan ? planSentence(site.data, plannedOf(areaIds, plan), cells) : 'No staffed-bed plan yet'}
        lede={
          <p className="max-w-[58rem]">
            {plan
              ? `Version ${String(plan.version)}, saved by ${plan.savedBy} on ${formatDateTime(plan.savedAt, site.data.timeZone)}: ${plan.reason}`
              : mayEdit
                ? 'Enter the staffed beds of every area and shift, then save. Tonight needs a plan before it can say anything.'
                : 'Tonight needs a plan before it can say anything. Ask an operations manager to enter it.'}
          </p>
        }
        aside={
          <p className="max-w-80">
            {required.isError && !required.data ? (
              'What is needed could not be loaded.'
            ) : required.data?.issuedAt ? (
              <>
                Needed at {risk} planning risk: at most {risk} of such shifts would run short. Week outlook{' '}
                {formatAge(now - required.data.issuedAt)} old.
              </>
            ) : (
              'What is needed is not known yet: no week outlook has been computed.'
            )}
          </p>
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-1">
        {mayEdit ? (
          <p className="max-w-[58rem] text-quiet text-ink2">
            Type over a figure; Enter takes it, Escape leaves it. Arrow keys move, Shift draws a range and what you then
            type fills it; Shift+Space takes a shift’s whole week. Copy and paste work with a spreadsheet, Ctrl+Z
            undoes.
          </p>
        ) : (
          <Notice title="For looking only">Operations managers change the plan.</Notice>
        )}
        {site.data.shifts.length === 0 ? (
          <Notice kind="caution" title="No shifts are set">
            <p>The plan is laid out by shift. Set the shifts first; half hours can be edited without them.</p>
            <ButtonLink look="second" className="mt-2" to={paths.siteSettings(siteId)}>
              Open the settings
            </ButtonLink>
          </Notice>
        ) : null}
        <PlanEditor
          key={siteId}
          site={site.data}
          plan={plan}
          required={required.data}
          mayEdit={mayEdit}
          openArea={search.get('halfHours')}
          onOpenArea={(areaId) => setParameter('halfHours', areaId)}
        />
        <Exceptions site={site.data} changes={changes} mayEdit={mayEdit} now={now} />
        <PlanVersions
          site={site.data}
          compared={compared}
          onCompare={(version) => setParameter('compare', version === null ? null : String(version))}
        />
      </div>
    </>
  );
}
