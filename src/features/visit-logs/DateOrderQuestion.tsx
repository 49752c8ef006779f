import type { DateOrder } from '../../../shared/domain/local-time.ts';

/** Asked only if nothing in the file tells 3 April from 4 March. */
export function DateOrderQuestion({
  order,
  onState,
}: {
  order: DateOrder | null;
  onState: (order: DateOrder) => void;
}) {
  return (
    <fieldset className="grid max-w-[58rem] gap-2 border-l-4 border-ink py-1 pl-3">
      <legend className="sr-only">The order of day and month</legend>
      <p className="font-extrabold text-ink">Which comes first in 03/04?</p>
      <p className="text-ink2">No date of the file can tell: every day and month in it is 12 or less.</p>
      {(['day first', 'month first'] as const).map((choice) => (
        <label key={choice} className="flex min-h-11 items-center gap-3">
          <input
            type="radio"
            name="date-order"
            className="size-5 accent-act"
            checked={order === choice}
            onChange={() => {
              onState(choice);
            }}
          />
          {choice === 'day first' ? 'The day: 3 April' : 'The month: 4 March'}
        </label>
      ))}
    </fieldset>
  );
}
