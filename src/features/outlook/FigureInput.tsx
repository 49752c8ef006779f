import type { InputHTMLAttributes, Ref } from 'react';
import { classNames } from '../../lib/class-names.ts';

/** One figure of the census: large, whole numbers, selected when entered so that typing replaces it. */
export function FigureInput({
  label,
  error,
  className,
  ...rest
}: InputHTMLAttributes<HTMLInputElement> & { label: string; error?: string | undefined; ref?: Ref<HTMLInputElement> }) {
  return (
    <input
      type="text"
      inputMode="numeric"
      autoComplete="off"
      maxLength={5}
      {...rest}
      aria-label={error ? `${label}: ${error}` : label}
      aria-invalid={error ? true : undefined}
      onFocus={(event) => event.target.select()}
      className={classNames(
        'h-11 w-full min-w-0 rounded-t-field border-0 border-b-2 border-edge bg-paper text-center text-census text-ink',
        'aria-invalid:border-b-4 aria-invalid:border-warn lg:h-9.5',
        className,
      )}
    />
  );
}
