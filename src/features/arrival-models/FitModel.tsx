import type { ReactNode } from 'react';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useFitModel } from './queries.ts';

/** Starts the fit of a candidate; says what is missing where there is nothing to fit on. */
export function FitModel({
  siteId,
  readyLogs,
  fitting,
  loadLog,
}: {
  siteId: string;
  readyLogs: number;
  /** One is being fitted already. */
  fitting: boolean;
  /** Where this person can load a log, if they may. */
  loadLog: ReactNode;
}) {
  const starting = useFitModel(siteId);
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
      <Button onClick={() => starting.mutate()} busy={starting.isPending} busyText="Starting…" disabled={fitting}>
        Fit a candidate model
      </Button>
      {fitting ? (
        <p className="text-quiet text-ink2">One is being fitted now; it appears in the list when it is done.</p>
      ) : null}
      {starting.error ? <ProblemNotice error={starting.error} /> : null}
    </div>
  );
}
