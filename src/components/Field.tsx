import { useId } from 'react';
import type { InputHTMLAttributes, ReactNode, Ref, SelectHTMLAttributes, TextareaHTMLAttributes } from 'react';
import { classNames } from '../lib/class-names.ts';

interface Around {
  label: string;
  /** Stands under the label: what to enter and in which unit. */
  hint?: ReactNode;
  error?: string | undefined;
}

export const fieldLook =
  'w-full bg-paper text-ink border-0 border-b-2 border-edge rounded-t-field px-3 min-h-11 placeholder:text-ink3 aria-invalid:border-warn';

function FieldFrame({ id, label, hint, error, children }: Around & { id: string; children: ReactNode }) {
  return (
    <div className="grid gap-1">
      <label htmlFor={id} className="font-bold text-ink">
        {label}
      </label>
      {hint ? (
        <div id={`${id}-hint`} className="text-quiet text-ink2">
          {hint}
        </div>
      ) : null}
      {children}
      {error ? (
        <div id={`${id}-error`} className="text-quiet font-bold text-warn" role="alert">
          {error}
        </div>
      ) : null}
    </div>
  );
}

function describedBy(id: string, hint: ReactNode, error: string | undefined) {
  return classNames(hint ? `${id}-hint` : null, error ? `${id}-error` : null) || undefined;
}

export interface TextFieldProps extends InputHTMLAttributes<HTMLInputElement>, Around {
  ref?: Ref<HTMLInputElement>;
}

/** One line of text, a number, a date; works with react-hook-form's `register`. */
export function TextField({ label, hint, error, className, ...rest }: TextFieldProps) {
  const id = useId();
  return (
    <FieldFrame id={id} label={label} hint={hint} error={error}>
      <input
        autoComplete="off"
        {...rest}
        id={id}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(id, hint, error)}
        className={classNames(fieldLook, className)}
      />
    </FieldFrame>
  );
}

export interface TextAreaProps extends TextareaHTMLAttributes<HTMLTextAreaElement>, Around {
  ref?: Ref<HTMLTextAreaElement>;
}

/** Several lines of text. */
export function TextArea({ label, hint, error, className, ...rest }: TextAreaProps) {
  const id = useId();
  return (
    <FieldFrame id={id} label={label} hint={hint} error={error}>
      <textarea
        rows={3}
        {...rest}
        id={id}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(id, hint, error)}
        className={classNames(fieldLook, 'py-2', className)}
      />
    </FieldFrame>
  );
}

export interface SelectFieldProps extends SelectHTMLAttributes<HTMLSelectElement>, Around {
  options: readonly { value: string; label: string; disabled?: boolean }[];
  ref?: Ref<HTMLSelectElement>;
}

/** One choice of a few, by the browser's own list. */
export function SelectField({ label, hint, error, options, className, ...rest }: SelectFieldProps) {
  const id = useId();
  return (
    <FieldFrame id={id} label={label} hint={hint} error={error}>
      <select
        {...rest}
        id={id}
        aria-invalid={error ? true : undefined}
        aria-describedby={describedBy(id, hint, error)}
        className={classNames(fieldLook, className)}
      >
        {options.map((option) => (
          <option key={option.value} value={option.value} disabled={option.disabled}>
            {option.label}
          </option>
        ))}
      </select>
    </FieldFrame>
  );
}
