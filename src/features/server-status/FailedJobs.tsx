import type { FailedJob } from '../../../shared/api/server-status.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { useRetryJob } from './queries.ts';

/** Background work that failed for good, where some can be tried again. */
export function FailedJobs({ jobs, timeZone }: { jobs: readonly FailedJob[]; timeZone: string }) {
  const retry = useRetryJob();
  return (
    <>
      <DataTable
        caption="Failed work"
        captionHidden
        rows={jobs}
        rowKey={({ id }) => id}
        empty="Nothing failed within 30 days."
        columns={[
          { key: 'title', header: 'What', rowHeader: true, cell: ({ title }) => title },
          { key: 'site', header: 'Site', cell: ({ siteName }) => siteName ?? 'Installation' },
          {
            key: 'ended',
            header: 'When',
            cell: ({ endedAt }) => (endedAt === null ? '' : formatDateTime(endedAt, timeZone)),
          },
          { key: 'why', header: 'Reason', cell: ({ error }) => error ?? 'No reason was left.' },
          {
            key: 'again',
            header: 'Again',
            cell: ({ id, title, mayRetry }) =>
              mayRetry ? (
                <Button
                  look="quiet"
                  aria-label={`Try “${title}” again`}
                  busy={retry.isPending && retry.variables === id}
                  busyText="Trying…"
                  onClick={() => retry.mutate(id)}
                >
                  Try again
                </Button>
              ) : (
                <span className="text-ink2">By whoever started it</span>
              ),
          },
        ]}
      />
      {retry.error ? <ProblemNotice error={retry.error} /> : null}
    </>
  );
}
