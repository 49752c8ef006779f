import { useId, useState } from 'react';
import { classNames } from '../../lib/class-names.ts';
import { fieldLook } from '../../components/Field.tsx';

/** One whole number, dragged or typed: a slider and a field of the same value. */
export function SliderField({
  label,
  unit,
  value,
  min,
  max,
  step = 1,
  error,
  onChange,
}: {
  label: string;
  /** Stands behind the number, as "%" or "beds". */
  unit: string;
  value: number;
  min: number;
  max: number;
  step?: number;
  error?: string | undefined;
  onChange: (value: number) => void;
}) {
  const id = useId();
  // What is typed may for a moment be no number ("", "-"): it is kept as typed and taken once it is one.
  const [typed, setTyped] = useState<string | null>(null);
  return (
    <div className="grid gap-1">
      <label htmlFor={`${id}-slider`} className="font-bold text-ink">
        {label}
      </label>
      <div className="flex items-center gap-3">
        <input
          id={`${id}-slider`}
          type="range"
          className="min-h-11 min-w-24 flex-1 cursor-pointer accent-act"
          min={Math.min(min, value)}
          max={Math.max(max, value)}
          step={step}
          value={value}
          aria-valuetext={`${String(value)} ${unit}`}
          aria-describedby={error ? `${id}-error` : undefined}
          onChange={(event) => {
            setTyped(null);
            onChange(Number(event.target.value));
          }}
        />
        <input
          type="number"
          inputMode="numeric"
          aria-label={`${label}, as a number`}
          aria-invalid={error ? true : undefined}
          aria-describedby={error ? `${id}-error` : undefined}
          className={classNames(fieldLook, 'max-w-22 text-right')}
          step={step}
          value={typed ?? String(value)}
          onChange={(event) => {
            const { value: text } = event.target;
            const number = Number(text);
            if (text.trim() === '' || !Number.isInteger(number)) setTyped(text);
            else {
              setTyped(null);
              onChange(number);
            }
          }}
          onBlur={() => setTyped(null)}
        />
        <span className="w-12 text-ink2">{unit}</span>
      </div>
      {error ? (
        <div id={`${id}-error`} className="text-quiet font-bold text-warn" role="alert">
          {error}
        </div>
      ) : null}
    </div>
  );
}
