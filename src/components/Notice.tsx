import type { ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';
import { asApiError } from '../lib/api-error.ts';
import { Button } from './Button.tsx';
import { RiskMark } from '../../shared/charts/RiskMark.tsx';

/**
 * Something to know before going on. A caution carries the mark of step 3 and ink 800, as every
 * caution of the product does; a note is quiet.
 */
export function Notice({
  kind = 'note',
  title,
  children,
  live = false,
  className,
}: {
  kind?: 'note' | 'caution';
  title?: string;
  children?: ReactNode;
  /** Read aloud when it appears. */
  live?: boolean;
  className?: string;
}) {
  return (
    <div
      role={live ? (kind === 'caution' ? 'alert' : 'status') : undefined}
      className={classNames(
        'flex gap-3 border-l-4 py-1 pl-3',
        kind === 'caution' ? 'border-ink' : 'border-hair',
        className,
      )}
    >
      {kind === 'caution' ? <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0 text-ink" /> : null}
      <div className="min-w-0 text-ink2">
        {title ? (
          <div className={classNames('text-ink', kind === 'caution' ? 'font-extrabold' : 'font-bold')}>{title}</div>
        ) : null}
        {children}
      </div>
    </div>
  );
}

/** A failed request in full: what happened, what was kept, what to do, every fault at once. */
export function ProblemNotice({
  error,
  onRetry,
  retrying = false,
  className,
}: {
  error: unknown;
  onRetry?: () => void;
  retrying?: boolean;
  className?: string;
}) {
  const problem = asApiError(error);
  // Asked again, what is not allowed or not there is refused again.
  const mayHelp = problem.status !== 403 && problem.status !== 404;
  return (
    <Notice kind="caution" title={problem.title} live {...(className ? { className } : {})}>
      <p>
        {problem.detail} {problem.kept ? <b className="text-ink">{problem.kept}</b> : null} {problem.next}
      </p>
      {problem.faults.length > 0 ? (
        <ul className="mt-1 list-disc pl-5">
          {problem.faults.map((fault) => (
            <li key={`${fault.at} ${fault.message}`}>
              {fault.at ? <b className="text-ink">{fault.at}: </b> : null}
              {fault.message}
            </li>
          ))}
        </ul>
      ) : null}
      {problem.requestId ? <p className="text-quiet text-ink3">Reference {problem.requestId}</p> : null}
      {onRetry && mayHelp ? (
        <Button look="second" className="mt-2" onClick={onRetry} busy={retrying} busyText="Trying…">
          Try again
        </Button>
      ) : null}
    </Notice>
  );
}
