import { useId, useRef, useState } from 'react';
import { changeBedsBody } from '../../../shared/api/staffed-beds.ts';
import type { ChangeBedsBody } from '../../../shared/api/staffed-beds.ts';
import type { CareArea } from '../../../shared/api/sites.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useUnsavedWork } from '../../lib/unsaved-work.ts';
import { FigureInput } from './FigureInput.tsx';
import { useChangeBeds } from './queries.ts';
import { screenTypedNote } from './screen-typed-note.ts';

interface Draft {
  beds: string;
  blocked: string;
  until: ChangeBedsBody['until'];
  reason: string;
}

/** Faults of a change before it is sent, by field; the server checks the same again. */
export async function checkBedChange(
  draft: Draft,
  area: Pick<CareArea, 'id' | 'name' | 'safeMinimum' | 'spaces'>,
): Promise<{ body: ChangeBedsBody; errors: null } | { body: null; errors: Partial<Record<keyof Draft, string>> }> {
  const number = (value: string) => (value.trim() === '' ? Number.NaN : Number(value));
  const parsed = changeBedsBody.safeParse({
    areaId: area.id,
    beds: number(draft.beds),
    blocked: number(draft.blocked),
    until: draft.until,
    reason: draft.reason,
  });
  const errors: Partial<Record<keyof Draft, string>> = {};
  if (!parsed.success) {
    for (const issue of parsed.error.issues) {
      const field = String(issue.path[0]) as keyof Draft;
      errors[field] ??= issue.code === 'invalid_type' ? 'Enter a whole number' : issue.message;
    }
    return { body: null, errors };
  }
  const { beds, blocked, reason } = parsed.data;
  if (beds < area.safeMinimum) errors.beds = `Not below the safe minimum of ${String(area.safeMinimum)}`;
  if (beds + blocked > area.spaces) {
    errors.beds ??= `${area.name} has ${String(area.spaces)} bed spaces; staffed and blocked together pass that`;
  }
  const identifying = await screenTypedNote(reason);
  if (identifying) errors.reason = identifying;
  return Object.keys(errors).length > 0 ? { body: null, errors } : { body: parsed.data, errors: null };
}

/**
 * Staffed beds tonight as the row's fourth figure. Typing another number opens what must be said
 * with it: until when, how many bed spaces are blocked, and why.
 */
export function StaffedTonight({ area, siteId, inForce }: { area: CareArea; siteId: string; inForce: number | null }) {
  const changing = useChangeBeds(siteId);
  const start: Draft = { beds: '', blocked: '0', until: 'end of this shift', reason: '' };
  const [draft, setDraft] = useState<Draft | null>(null);
  const [errors, setErrors] = useState<Partial<Record<keyof Draft, string>>>({});
  const formId = useId();
  const current = inForce === null ? '' : String(inForce);
  const open = draft !== null && draft.beds !== current;
  useUnsavedWork(open, 'a change of staffed beds that is not saved yet');
  const set = (change: Partial<Draft>) => {
    setDraft({ ...(draft ?? start), ...change });
    setErrors({});
  };

  const checking = useRef(false);

  async function save() {
    if (!draft || changing.isPending || checking.current) return;
    checking.current = true;
    const checked = await checkBedChange(draft, area);
    checking.current = false;
    if (checked.errors) {
      setErrors(checked.errors);
      return;
    }
    changing.mutate(checked.body, { onSuccess: () => setDraft(null) });
  }

  return (
    <form
      id={formId}
      className="contents"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        void save();
      }}
    >
      <FigureInput
        label={`${area.name}, staffed ${area.spaceKind === 'chair' ? 'chairs' : 'beds'} now`}
        value={draft?.beds ?? current}
        error={errors.beds}
        onChange={(event) => set({ beds: event.target.value })}
      />
      {open ? (
        // While it is open the bar at the foot gives way: it would lie over these fields, and speaks of the census only.
        <div data-beds-change="" className="col-span-full mt-2 grid gap-3">
          {errors.beds ? (
            <p className="text-label font-bold text-warn" role="alert">
              {errors.beds}
            </p>
          ) : null}
          <SelectField
            label="Until"
            value={draft.until}
            onChange={(event) => set({ until: event.target.value as Draft['until'] })}
            options={[
              { value: 'end of this shift', label: 'End of this shift' },
              { value: 'end of next shift', label: 'End of next shift' },
            ]}
          />
          <TextField
            label="Blocked bed spaces"
            inputMode="numeric"
            value={draft.blocked}
            error={errors.blocked}
            onChange={(event) => set({ blocked: event.target.value })}
          />
          <TextField
            label="Reason"
            placeholder="No patient details"
            maxLength={500}
            value={draft.reason}
            error={errors.reason}
            onChange={(event) => set({ reason: event.target.value })}
          />
          {changing.error ? <ProblemNotice error={changing.error} /> : null}
          <div className="flex gap-2">
            <Button className="flex-1" type="submit" busy={changing.isPending} busyText="Saving…">
              Change beds
            </Button>
            <Button look="quiet" onClick={() => setDraft(null)}>
              Cancel
            </Button>
          </div>
        </div>
      ) : null}
    </form>
  );
}
