import { useState, type ReactNode } from 'react';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { useFitModel } from './queries.ts';

/** Starts the fit of a candidate; says what is missing where there is nothing to fit on. */
export function FitModel({
  siteId,
  readyLogs,
  fitting,
  logs,
  loadLog,
}: {
  siteId: string;
  readyLogs: number;
  /** One is being fitted already. */
  fitting: boolean;
  /** The logs that can be chosen; none where this person may not read the list. */
  logs: readonly { id: string; label: string }[];
  /** Where this person can load a log, if they may. */
  loadLog: ReactNode;
}) {
  const starting = useFitModel(siteId);
  const [left, setLeft] = useState<ReadonlySet<string>>(new Set());
  const chosen = logs.filter(({ id }) => !left.has(id)).map(({ id }) => id);
  const none = logs.length > 0 && chosen.length === 0;
  if (readyLogs === 0) {
    return (
      <div className="grid justify-items-start gap-3">
        <p className="text-ink2">A model is fitted on accepted visit logs, and there is none yet.</p>
        {loadLog ?? <p className="text-ink2">Ask your data steward to load one.</p>}
      </div>
    );
  }
  return (
    <div className="grid justify-items-start gap-3">
      {logs.length > 1 ? (
        <details>
          <summary className="link inline-block min-h-6 cursor-pointer font-bold text-ink">
            {chosen.length === logs.length
              ? `On all ${formatCount(logs.length, 'log')}`
              : `On ${formatNumber(chosen.length)} of ${formatCount(logs.length, 'log')}`}
          </summary>
          <fieldset className="py-2">
            <legend className="text-ink2">
              Logs to fit on. Where chosen ones overlap, the newest counts; days that none covers are left out.
            </legend>
            {logs.map(({ id, label }) => (
              <label key={id} className="flex min-h-11 items-center gap-3">
                <input
                  type="checkbox"
                  className="size-5 shrink-0 accent-act"
                  checked={!left.has(id)}
                  onChange={(event) => {
                    const next = new Set(left);
                    if (event.target.checked) next.delete(id);
                    else next.add(id);
                    setLeft(next);
                  }}
                />
                {label}
              </label>
            ))}
          </fieldset>
        </details>
      ) : null}
      <Button
        onClick={() => starting.mutate(chosen.length === logs.length ? null : chosen)}
        busy={starting.isPending}
        busyText="Starting…"
        disabled={fitting || none}
      >
        Fit a candidate model
      </Button>
      {none ? <p className="text-quiet text-ink2">Choose at least one log.</p> : null}
      {fitting ? (
        <p className="text-quiet text-ink2">One is being fitted now; it appears in the list when it is done.</p>
      ) : null}
      {starting.error ? <ProblemNotice error={starting.error} /> : null}
    </div>
  );
}
