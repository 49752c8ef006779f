import { useMemo, useReducer } from 'react';
import type { z } from 'zod';
import type { Site } from '../../../shared/api/sites.ts';
import type { RequiredBeds, staffedBeds } from '../../../shared/api/staffed-beds.ts';
import { Button } from '../../components/Button.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { HalfHourGrid } from './HalfHourGrid.tsx';
import { changeDraft, isChanged, plannedOf, startDraft } from './plan-draft.ts';
import { PlanGrid } from './PlanGrid.tsx';
import { PlanReview } from './PlanReview.tsx';
import { useSavePlan } from './queries.ts';
import { requiredCells } from './required-cells.ts';

/** The plan in the grid, with what is needed, and what was changed but not saved. */
export function PlanEditor({
  site,
  plan,
  required,
  mayEdit,
  openArea,
  onOpenArea,
}: {
  site: Site;
  plan: z.infer<typeof staffedBeds>['plan'];
  /** Undefined until it is loaded. */
  required: RequiredBeds | undefined;
  mayEdit: boolean;
  openArea: string | null;
  onOpenArea: (areaId: string | null) => void;
}) {
  const areaIds = site.areas.map(({ id }) => id);
  const [draft, dispatch] = useReducer(changeDraft, null, () => startDraft(areaIds, plan));
  const save = useSavePlan(site.id);
  const changed = isChanged(draft);
  useUnsavedWork(changed, 'a staffed-bed plan that is not saved yet');
  const cells = useMemo(
    () => (required?.issuedAt ? requiredCells(required, site.shifts, site.timeZone) : null),
    [required, site.shifts, site.timeZone],
  );
  const newer = plan !== null && plan.version > draft.version ? plan : null;
  const rebase = (keepChanges: boolean) => {
    if (newer) dispatch({ type: 'rebase', version: newer.version, base: plannedOf(areaIds, newer), keepChanges });
  };
  // Nothing of one's own stands in the way of what was saved meanwhile, by oneself or by others.
  if (newer && !changed) rebase(false);
  const open = site.areas.find(({ id }) => id === openArea);
  const editing = mayEdit ? dispatch : undefined;
  return (
    <div className="grid grid-cols-1 gap-6">
      {newer && changed && !save.isPending ? (
        <Notice kind="caution" title={`${newer.savedBy} saved version ${String(newer.version)} while you edit`} live>
          <p>
            {formatDateTime(newer.savedAt, site.timeZone)}: {newer.reason}. Your changes are still in the grid.
          </p>
          <div className="mt-2 flex flex-wrap gap-4">
            <Button look="second" onClick={() => rebase(true)}>
              Put my changes on top of it
            </Button>
            <Button look="quiet" onClick={() => rebase(false)}>
              Take it as it is
            </Button>
          </div>
        </Notice>
      ) : null}
      <PlanGrid
        site={site}
        draft={draft}
        required={cells}
        risk={required?.planningRisk ?? site.planningRisk}
        openArea={open?.id ?? null}
        onOpenArea={onOpenArea}
        onChange={editing}
      />
      {open ? (
        <HalfHourGrid
          area={open}
          draft={draft}
          timeZone={site.timeZone}
          onClose={() => onOpenArea(null)}
          onChange={editing}
        />
      ) : null}
      {changed && mayEdit ? (
        <PlanReview
          key={draft.version}
          site={site}
          draft={draft}
          saving={save.isPending}
          error={save.error}
          onChange={dispatch}
          onSave={(reason) =>
            save.mutate(
              {
                reason,
                basedOnVersion: draft.version,
                // Without holes: those keep the button shut.
                areas: site.areas.map(({ id }) => ({ areaId: id, halfHours: draft.now[id].map((beds) => beds ?? -1) })),
              },
              {
                onSuccess: ({ version }) => dispatch({ type: 'rebase', version, base: draft.now, keepChanges: false }),
              },
            )
          }
        />
      ) : null}
    </div>
  );
}
