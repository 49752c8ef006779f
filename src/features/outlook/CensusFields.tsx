import { useFormState, useWatch } from 'react-hook-form';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatTime } from '../../lib/format.ts';
import { censusFields, isAreaEdited } from './census-form.ts';
import type { CensusField } from './census-form.ts';
import { FigureInput } from './FigureInput.tsx';
import { useCensusEntryContext } from './use-census-entry.ts';

const names: Record<CensusField, string> = { present: 'Present', waiting: 'Waiting', boarding: 'Boarding' };

/** Present, waiting and boarding of one area; Enter saves. The fields are children of the row's own grid. */
export function CensusFields({ index, areaName, formId }: { index: number; areaName: string; formId: string }) {
  const { form, save } = useCensusEntryContext();
  const { errors } = useFormState({ control: form.control, name: `areas.${index}` });
  return (
    <form
      id={formId}
      className="contents"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        save();
      }}
    >
      {censusFields.map((field) => (
        <FigureInput
          key={field}
          label={`${areaName}, ${names[field].toLowerCase()}`}
          error={errors.areas?.[index]?.[field]?.message}
          {...form.register(`areas.${index}.${field}`)}
        />
      ))}
      {/* Enter in a field presses this one; the visible button stands under the row when there is something to save. */}
      <button type="submit" hidden tabIndex={-1} aria-hidden="true" />
    </form>
  );
}

/** Under a row that is being edited: what was counted before, the faults, and the button. */
export function CensusSave({ index, timeZone }: { index: number; timeZone: string }) {
  const { form, base, census, saving, error, save } = useCensusEntryContext();
  const values = useWatch({ control: form.control });
  const { errors } = useFormState({ control: form.control, name: `areas.${index}` });
  const row = values.areas?.[index];
  const typed = row && {
    areaId: row.areaId ?? '',
    present: row.present ?? '',
    waiting: row.waiting ?? '',
    boarding: row.boarding ?? '',
  };
  const edited = typed ? isAreaEdited({ ...base, areas: base.areas.with(index, typed) }, base, index) : false;
  if (!edited || !typed) return null;
  const before = base.areas[index];
  const counted = census?.areas.find((area) => area.areaId === before.areaId);
  const changes = censusFields.filter((field) => typed[field] !== before[field] && before[field] !== '');
  const faults = censusFields.flatMap((field) => {
    const message = errors.areas?.[index]?.[field]?.message;
    return message ? [{ field, message }] : [];
  });
  return (
    <div className="mt-2 grid gap-2">
      {counted && changes.length > 0 ? (
        <p className="text-label text-ink2 tight">
          {changes.map((field, place) => (
            <span key={field}>
              {place > 0 ? ', ' : null}
              {place === 0 ? names[field] : names[field].toLowerCase()} was {before[field]}
            </span>
          ))}{' '}
          at {formatTime(counted.takenAt, timeZone)}.
        </p>
      ) : null}
      {faults.length > 0 ? (
        <ul className="text-label font-bold text-warn" role="alert">
          {faults.map((fault) => (
            <li key={fault.field}>
              {names[fault.field]}: {fault.message}
            </li>
          ))}
        </ul>
      ) : null}
      {error ? <ProblemNotice error={error} /> : null}
      <Button className="w-full" onClick={save} busy={saving} busyText="Saving…">
        Save census
      </Button>
    </div>
  );
}
