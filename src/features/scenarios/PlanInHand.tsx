import { useState } from 'react';
import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import type { PlanChange, PlanChangeKind, PlanFault } from '../../../shared/domain/plan-change.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { ChangeFields } from './ChangeFields.tsx';
import { changeNames } from './plan-words.ts';
import type { TimeFrame } from './WhenFields.tsx';

/** A change with a key of its own, so that its fields keep what was typed when another is removed. */
export interface DraftChange {
  key: number;
  change: PlanChange;
}

const kinds = Object.keys(changeNames) as PlanChangeKind[];

/** The plan that is being put together: its changes, and where it is saved. */
export function PlanInHand({
  draft,
  name,
  basis,
  frame,
  faults,
  maySave,
  saving,
  error,
  onName,
  onAdd,
  onChange,
  onRemove,
  onClear,
  onSave,
}: {
  draft: readonly DraftChange[];
  name: string;
  basis: WhatIfBasis;
  frame: TimeFrame;
  faults: readonly PlanFault[];
  maySave: boolean;
  saving: boolean;
  error: unknown;
  onName: (name: string) => void;
  onAdd: (kind: PlanChangeKind) => void;
  onChange: (key: number, change: PlanChange) => void;
  onRemove: (key: number) => void;
  onClear: () => void;
  onSave: (andConfirm: boolean) => void;
}) {
  const [kind, setKind] = useState<PlanChangeKind>('beds');
  const [asked, setAsked] = useState(false);
  const screened = screenNote(name);
  const nameFault =
    name.trim().length < 3
      ? 'Give the plan a name of at least 3 characters.'
      : screened !== null
        ? `This seems to hold ${withArticle(screened)}. Name the plan without it.`
        : undefined;
  const save = (andConfirm: boolean) => {
    setAsked(true);
    if (!nameFault && faults.length === 0) onSave(andConfirm);
  };
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] content-start gap-4" aria-labelledby="plan-in-hand">
      <h2 id="plan-in-hand" className="text-section">
        The plan in hand
      </h2>
      {draft.length === 0 ? (
        <p className="text-ink2">
          Add a change, then drag or type: the answer beside it follows at once. Nothing is stored until you save.
        </p>
      ) : null}
      {draft.map(({ key, change }, place) => (
        <ChangeFields
          key={key}
          change={change}
          place={place}
          basis={basis}
          frame={frame}
          faults={faults}
          onChange={(next) => onChange(key, next)}
          onRemove={() => onRemove(key)}
        />
      ))}
      <div className="flex flex-wrap items-end gap-3 border-t border-hair pt-3">
        <div className="min-w-56 flex-1">
          <SelectField
            label={draft.length === 0 ? 'A change to try' : 'Another change'}
            value={kind}
            options={kinds.map((value) => ({ value, label: changeNames[value] }))}
            onChange={(event) => setKind(event.target.value as PlanChangeKind)}
          />
        </div>
        <Button look="second" onClick={() => onAdd(kind)}>
          Add it
        </Button>
      </div>
      {draft.length > 0 && maySave ? (
        <form
          className="grid gap-3 border-t border-hair pt-3"
          onSubmit={(event) => {
            event.preventDefault();
            save(false);
          }}
        >
          <TextField
            label="Name of the plan"
            hint="As you would say it at the bed meeting; nothing that identifies a person."
            value={name}
            maxLength={80}
            error={asked ? nameFault : undefined}
            onChange={(event) => onName(event.target.value)}
          />
          {error ? <ProblemNotice error={error} /> : null}
          {asked && faults.length > 0 ? (
            <p className="font-bold text-warn" role="alert">
              Mend what is marked above first.
            </p>
          ) : null}
          <div className="flex flex-wrap gap-3">
            <Button busy={saving} busyText="Saving…" onClick={() => save(true)}>
              Save and confirm
            </Button>
            <Button look="second" type="submit" busy={saving} busyText="Saving…">
              Save only
            </Button>
            <Button look="quiet" onClick={onClear}>
              Start over
            </Button>
          </div>
        </form>
      ) : null}
      {draft.length > 0 && !maySave ? (
        <div className="grid justify-items-start gap-2 border-t border-hair pt-3 text-ink2">
          <p>
            Plans are saved and confirmed by operations managers. What you try here is gone when you leave the page.
          </p>
          <Button look="quiet" onClick={onClear}>
            Start over
          </Button>
        </div>
      ) : null}
    </section>
  );
}
