import type { ReactNode } from 'react';
import type { Acknowledgement } from '../../../shared/api/acknowledgements.ts';
import { formatTime } from '../../lib/format.ts';

/** One line: when, who, what. What was added later follows in its order. */
export function AcknowledgedLine({
  made,
  timeZone,
  action,
}: {
  made: readonly Acknowledgement[];
  timeZone: string;
  action: ReactNode;
}) {
  return (
    <p role="status">
      {made.map((one, index) => (
        <span key={one.id}>
          <b>
            {index === 0 ? 'Acknowledged' : 'Added'} {formatTime(one.at, timeZone)} by {one.by}.
          </b>{' '}
          <span className="text-ink2">{sentenceEnd(one.note)}</span>{' '}
        </span>
      ))}
      {action}
    </p>
  );
}

/** A note ends as a sentence does, whatever was typed. */
function sentenceEnd(note: string): string {
  return /[.!?]$/.test(note) ? note : `${note}.`;
}
