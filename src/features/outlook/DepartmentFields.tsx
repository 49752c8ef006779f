import { useFormState, useWatch } from 'react-hook-form';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { FigureInput } from './FigureInput.tsx';
import { useCensusEntryContext } from './use-census-entry.ts';

export type DepartmentField = 'undecidedWaiting' | 'ambulancesHolding' | 'arrivalsSinceMidnight';

/** Figures of the whole department, each with its caption; the button comes when one is edited. */
export function DepartmentFields({ fields }: { fields: readonly { field: DepartmentField; label: string }[] }) {
  const { form, base, save, saving, error } = useCensusEntryContext();
  const values = useWatch({ control: form.control });
  const { errors } = useFormState({ control: form.control });
  const edited = fields.some(({ field }) => (values[field] ?? '') !== base[field]);
  const faults = fields.flatMap(({ field, label }) => {
    const message = errors[field]?.message;
    return message ? [{ label, message }] : [];
  });
  return (
    <form
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        if (edited) save();
      }}
    >
      <div className="flex items-end justify-end gap-2">
        {fields.map(({ field, label }) => (
          <label
            key={field}
            className="flex items-center gap-2 text-right text-small leading-tight font-semibold text-ink2 tight"
          >
            <span className="max-w-20">{label}</span>
            <span className={fields.length > 1 ? 'w-12' : 'w-15'}>
              <FigureInput label={label} error={errors[field]?.message} {...form.register(field)} />
            </span>
          </label>
        ))}
      </div>
      {faults.length > 0 ? (
        <ul className="mt-1 text-label font-bold text-warn" role="alert">
          {faults.map((fault) => (
            <li key={fault.label}>
              {fault.label}: {fault.message}
            </li>
          ))}
        </ul>
      ) : null}
      {edited && error ? <ProblemNotice error={error} className="mt-2" /> : null}
      {edited ? (
        <Button type="submit" className="mt-2 w-full" busy={saving} busyText="Saving…">
          Save census
        </Button>
      ) : (
        <button type="submit" hidden tabIndex={-1} aria-hidden="true" />
      )}
    </form>
  );
}
