/** One answer of a few, each on a line of its own. */
export function Choice<Value extends string>({
  legend,
  hint,
  name,
  options,
  chosen,
  error,
  onChoose,
}: {
  legend: string;
  hint?: string | undefined;
  name: string;
  options: readonly { value: Value; label: string }[];
  chosen: Value | null;
  error: string | undefined;
  onChoose: (value: Value) => void;
}) {
  return (
    <fieldset aria-invalid={error ? true : undefined}>
      <legend className="font-bold text-ink">{legend}</legend>
      {hint ? <p className="text-quiet text-ink2">{hint}</p> : null}
      {options.map((option) => (
        <label key={option.value} className="flex min-h-11 items-center gap-3">
          <input
            type="radio"
            name={name}
            className="size-5 shrink-0 accent-act"
            checked={chosen === option.value}
            onChange={() => {
              onChoose(option.value);
            }}
          />
          {option.label}
        </label>
      ))}
      {error ? (
        <p role="alert" className="text-quiet font-bold text-warn">
          {error}
        </p>
      ) : null}
    </fieldset>
  );
}
