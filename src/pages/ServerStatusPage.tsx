import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { Backups } from '../features/server-status/Backups.tsx';
import { FailedJobs } from '../features/server-status/FailedJobs.tsx';
import { formatBytes } from '../features/server-status/format-bytes.ts';
import { MailState } from '../features/server-status/MailState.tsx';
import { useServerStatus } from '../features/server-status/queries.ts';
import { statusCautions } from '../features/server-status/status-cautions.ts';
import { formatAge, formatCount, formatNumber } from '../lib/format.ts';

/** /status: how the server is; the administrator's. */
export function ServerStatusPage() {
  const query = useServerStatus();
  const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
  const status = query.data;
  const cautions = status ? statusCautions(status) : [];
  return (
    <>
      <PageHead
        tab="Server status"
        title={
          status
            ? cautions.length === 0
              ? 'Nothing to see to'
              : formatCount(cautions.length, 'thing to see to', 'things to see to')
            : 'Server status'
        }
        lede={
          status ? (
            <p>
              Version {status.softwareVersion}, running for {formatAge(status.now - status.startedAt)}.
            </p>
          ) : undefined
        }
      />
      <div className="page-pad grid grid-cols-1 gap-10 pt-2">
        {query.error ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={8} label="Asking the server" /> : null}
        {status ? (
          <>
            {cautions.length > 0 ? (
              <div className="grid gap-3">
                {cautions.map((caution) => (
                  <Notice key={caution} kind="caution" title={caution} />
                ))}
              </div>
            ) : null}
            <dl className="grid max-w-4xl grid-cols-[auto_1fr] gap-x-6 gap-y-2">
              {(
                [
                  [
                    'Database',
                    `${formatBytes(status.database.bytes)}, write-ahead log ${formatBytes(status.database.logBytes)}`,
                  ],
                  ['Disk', `${formatBytes(status.disk.freeBytes)} free of ${formatBytes(status.disk.totalBytes)}`],
                  ['Schema', `${formatCount(status.migrations.done, 'migration')}, newest ${status.migrations.newest}`],
                  [
                    'Background work',
                    `${String(status.queue.running)} running, ${String(status.queue.queued)} waiting`,
                  ],
                  [
                    'Longest stall',
                    `${formatNumber(status.longestStallMilliseconds, 0)} ms within the last minute or so`,
                  ],
                  ['Memory', formatBytes(status.memoryBytes)],
                  ['Engine', `${status.engineVersion}, Node ${status.nodeVersion}`],
                ] as const
              ).map(([name, text]) => (
                <div key={name} className="contents">
                  <dt className="text-ink2">{name}</dt>
                  <dd className="min-w-0 break-words font-semibold">{text}</dd>
                </div>
              ))}
            </dl>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="failed">
              <h2 id="failed" className="text-section">
                Failed work
              </h2>
              <FailedJobs jobs={status.queue.failed} timeZone={timeZone} />
            </section>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="backups">
              <h2 id="backups" className="text-section">
                Backups
              </h2>
              <Backups backups={status.backups} timeZone={timeZone} />
            </section>
            <section className="grid grid-cols-1 gap-4" aria-labelledby="mail">
              <h2 id="mail" className="text-section">
                Mail
              </h2>
              <MailState mail={status.mail} timeZone={timeZone} />
            </section>
          </>
        ) : null}
      </div>
    </>
  );
}
