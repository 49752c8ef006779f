import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';
import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime, formatNumber } from '../../lib/format.ts';
import { leftOutInWords, periodInWords, stateWord } from './log-words.ts';

/** All logs of the site, newest first. */
export function VisitLogList({
  logs,
  numberOf,
  timeZone,
  hrefOf,
  progressOf,
  empty,
}: {
  logs: readonly VisitLogSummary[];
  /** The number by which the calendar calls a log. */
  numberOf: (logId: string) => number;
  timeZone: string;
  hrefOf: (logId: string) => string;
  /** How far a load is. */
  progressOf: (jobId: string) => ReactNode;
  empty: ReactNode;
}) {
  return (
    <DataTable
      caption="Visit logs"
      captionHidden
      rows={logs}
      rowKey={(log) => log.id}
      empty={empty}
      columns={[
        { key: 'number', header: 'No.', figure: true, cell: (log) => formatNumber(numberOf(log.id)) },
        {
          key: 'period',
          header: 'Arrivals',
          rowHeader: true,
          cell: (log) => (
            <Link to={hrefOf(log.id)} className="link inline-block min-h-6">
              {periodInWords(log.period, timeZone)}
            </Link>
          ),
        },
        {
          key: 'state',
          header: 'State',
          cell: (log) => (log.status === 'loading' && log.jobId ? progressOf(log.jobId) : stateWord(log)),
        },
        {
          key: 'rows',
          header: 'Rows',
          figure: true,
          cell: (log) =>
            log.kind === 'hourly counts' ? `${formatNumber(log.rows)} hourly counts` : formatNumber(log.rows),
        },
        { key: 'out', header: 'Rows left out', figure: true, cell: (log) => leftOutInWords(log.leftOutRows) },
        { key: 'file', header: 'File', cell: (log) => <span className="break-all text-ink2">{log.fileName}</span> },
        {
          key: 'uploaded',
          header: 'Loaded',
          cell: (log) => (
            <span className="text-ink2">
              {formatDateTime(log.uploadedAt, timeZone)}, {log.uploadedBy}
            </span>
          ),
        },
      ]}
    />
  );
}
