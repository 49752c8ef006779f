import { useState } from 'react';
import type { ScenarioLine, WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { changeInWords } from './plan-words.ts';
import { usePlanAction } from './queries.ts';

const stateNames: Record<ScenarioLine['state'], string> = {
  saved: 'Saved, not confirmed',
  confirming: 'Being confirmed',
  confirmed: 'Confirmed',
  failed: 'Not confirmed: it failed',
  cancelled: 'Not confirmed: cancelled',
  withdrawn: 'Withdrawn',
};

/** Saved plans: what each tries, how far it is, and what can be done with it. */
export function SavedPlans({
  siteId,
  plans,
  areas,
  timeZone,
  opened,
  maySave,
  onToggle,
  onStartFrom,
}: {
  siteId: string;
  plans: readonly ScenarioLine[];
  areas: WhatIfBasis['areas'];
  timeZone: string;
  /** Ids of the plans that stand beside as is. */
  opened: readonly string[];
  maySave: boolean;
  onToggle: (id: string) => void;
  onStartFrom: (plan: ScenarioLine) => void;
}) {
  const [asked, setAsked] = useState<ScenarioLine | null>(null);
  const confirm = usePlanAction(siteId, 'confirm');
  const cancel = usePlanAction(siteId, 'cancel');
  const withdraw = usePlanAction(siteId, 'withdraw');
  const failed = confirm.error ?? cancel.error;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-labelledby="saved-plans">
      <h2 id="saved-plans" className="text-section">
        Saved plans
      </h2>
      {failed ? <ProblemNotice error={failed} /> : null}
      <DataTable
        caption="Saved plans, newest first"
        captionHidden
        rows={plans}
        rowKey={({ id }) => id}
        empty={
          maySave
            ? 'No plan is saved yet. Add a change above, watch what it does, and save it under a name.'
            : 'No plan is saved yet. An operations manager saves plans; you can try changes above.'
        }
        columns={[
          {
            key: 'name',
            header: 'Plan',
            rowHeader: true,
            cell: (plan) => (
              <>
                {plan.name}
                <span className="block text-quiet font-semibold text-ink2">
                  {formatDateTime(plan.savedAt, timeZone)}, {plan.savedBy}
                </span>
              </>
            ),
          },
          {
            key: 'changes',
            header: 'What it tries',
            cell: (plan) => (
              <ul>
                {plan.changes.slice(0, 4).map((change) => (
                  <li key={JSON.stringify(change)}>{changeInWords(change, areas, timeZone)}</li>
                ))}
                {plan.changes.length > 4 ? <li>and {plan.changes.length - 4} more</li> : null}
              </ul>
            ),
          },
          {
            key: 'state',
            header: 'State',
            cell: (plan) => (
              <div className="grid min-w-44 gap-1">
                <span className="font-bold text-ink">
                  {plan.adoptedAt === null ? stateNames[plan.state] : `Adopted, ${plan.adoptedBy ?? ''}`}
                </span>
                {plan.error ? <span className="text-ink2">{plan.error}</span> : null}
                {plan.progress ? (
                  <>
                    <progress
                      className="progress-bar"
                      value={plan.progress.share}
                      max={1}
                      aria-label={`Confirming “${plan.name}”: ${plan.progress.text}`}
                    />
                    <span className="text-quiet text-ink2">{plan.progress.text}</span>
                  </>
                ) : null}
              </div>
            ),
          },
          {
            key: 'actions',
            header: 'Do',
            cell: (plan) => (
              <div className="flex max-w-72 flex-wrap gap-x-4 gap-y-1">
                <Button look="quiet" aria-pressed={opened.includes(plan.id)} onClick={() => onToggle(plan.id)}>
                  {opened.includes(plan.id) ? 'Put away' : 'Put beside as is'}
                </Button>
                <Button look="quiet" onClick={() => onStartFrom(plan)}>
                  Start from it
                </Button>
                {maySave && ['saved', 'failed', 'cancelled'].includes(plan.state) ? (
                  <Button
                    look="quiet"
                    busy={confirm.isPending && confirm.variables === plan.id}
                    busyText="Asking…"
                    onClick={() => confirm.mutate(plan.id)}
                  >
                    Confirm
                  </Button>
                ) : null}
                {maySave && plan.state === 'confirming' ? (
                  <Button
                    look="quiet"
                    busy={cancel.isPending}
                    busyText="Cancelling…"
                    onClick={() => cancel.mutate(plan.id)}
                  >
                    Cancel
                  </Button>
                ) : null}
                {maySave && plan.own && plan.state !== 'confirming' ? (
                  <Button look="quiet" aria-label={`Withdraw “${plan.name}”`} onClick={() => setAsked(plan)}>
                    Withdraw
                  </Button>
                ) : null}
              </div>
            ),
          },
        ]}
      />
      <Dialog title={`Withdraw “${asked?.name ?? ''}”?`} open={asked !== null} onClose={() => setAsked(null)}>
        <div className="grid gap-4">
          <p className="text-ink2">It leaves this list. What was adopted from it stays in the staffed-bed plan.</p>
          {withdraw.error ? <ProblemNotice error={withdraw.error} /> : null}
          <Button
            className="justify-self-start"
            busy={withdraw.isPending}
            busyText="Withdrawing…"
            onClick={() => {
              if (asked) withdraw.mutate(asked.id, { onSuccess: () => setAsked(null) });
            }}
          >
            Withdraw the plan
          </Button>
        </div>
      </Dialog>
    </section>
  );
}
