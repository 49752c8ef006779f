import type { OwnSession } from '../../../shared/api/session.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { useEndOwnSession } from './own-sessions.ts';

/** Each session with its device and last use; every other than this one can be ended. Times in the browser's zone. */
export function OwnSessionList({ sessions }: { sessions: readonly OwnSession[] }) {
  const ending = useEndOwnSession();
  const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
  return (
    <div className="grid grid-cols-1 gap-4">
      {ending.error ? <ProblemNotice error={ending.error} /> : null}
      <DataTable
        caption="Where you are signed in"
        captionHidden
        rows={sessions}
        rowKey={({ id }) => id}
        empty="Nowhere."
        columns={[
          {
            key: 'device',
            header: 'Device',
            rowHeader: true,
            cell: ({ device, current }) => (current ? `${device}, this one` : device),
          },
          { key: 'address', header: 'From', cell: ({ address }) => address || 'Not noted' },
          {
            key: 'signed-in',
            header: 'Signed in',
            cell: ({ signedInAt }) => <span className="text-ink2">{formatDateTime(signedInAt, timeZone)}</span>,
          },
          {
            key: 'used',
            header: 'Last used',
            cell: ({ usedAt, locked }) => formatDateTime(usedAt, timeZone) + (locked ? ', locked since' : ''),
          },
          {
            key: 'end',
            header: 'State',
            cell: ({ id, device, current, signedInAt }) =>
              current ? (
                'In use here'
              ) : (
                <Button
                  look="quiet"
                  busy={ending.isPending && ending.variables === id}
                  busyText="Ending…"
                  aria-label={`End the session of ${device}, signed in ${formatDateTime(signedInAt, timeZone)}`}
                  onClick={() => ending.mutate(id)}
                >
                  End
                </Button>
              ),
          },
        ]}
      />
    </div>
  );
}
