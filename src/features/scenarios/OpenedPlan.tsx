import type { ScenarioLine, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatDateTime, zoneOf } from '../../lib/format.ts';
import { AdoptPlan } from './AdoptPlan.tsx';
import { ConfirmedDifferences } from './ConfirmedDifferences.tsx';
import type { PlanPreview } from './preview-plan.ts';
import { useScenario } from './queries.ts';

/** A saved plan that stands beside as is: its confirmed differences, and where it is adopted. */
export function OpenedPlan({
  site,
  plan,
  areas,
  preview,
  mayAdopt,
}: {
  site: { id: string; name: string; timeZone: string };
  plan: ScenarioLine;
  areas: WhatIfBasis['areas'];
  /** By the exact method; null where as is has moved since the plan was saved. */
  preview: PlanPreview | null;
  mayAdopt: boolean;
}) {
  const { timeZone } = site;
  const whole = useScenario(site.id, plan.id, plan.state);
  const title = `plan-${plan.id}`;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-4" aria-labelledby={title}>
      <h2 id={title} className="text-section">
        {plan.name}
      </h2>
      {preview === null ? (
        <Notice
          title={`Saved on the figures of ${formatDateTime(plan.basisIssuedAt, timeZone)}; as is has moved since.`}
        >
          <p>
            The table above tries it on today’s figures. For confirmed differences on those, start from it and save
            again.
          </p>
        </Notice>
      ) : null}
      {plan.state === 'confirming' ? (
        <p role="status" className="text-ink2">
          Being confirmed: {plan.progress?.text ?? 'waiting'}. You may leave this page; it goes on.
        </p>
      ) : plan.state !== 'confirmed' ? (
        <p className="text-ink2">
          Not confirmed yet: confirm it under “Saved plans” to see its differences and to adopt it.
        </p>
      ) : whole.data ? (
        <>
          <ConfirmedDifferences
            plan={whole.data}
            areas={areas}
            preview={preview}
            siteName={site.name}
            zone={zoneOf(timeZone)}
            timeZone={timeZone}
          />
          {mayAdopt ? <AdoptPlan siteId={site.id} plan={plan} areas={areas} timeZone={timeZone} /> : null}
        </>
      ) : whole.error ? (
        <ProblemNotice error={whole.error} onRetry={() => void whole.refetch()} retrying={whole.isFetching} />
      ) : (
        <SkeletonLines lines={4} label="Loading the differences" />
      )}
    </section>
  );
}
