import type { ReactNode } from 'react';
import type { VisitLogDetail } from '../../../shared/api/visit-logs.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDate, formatDateTime, formatList, formatNumber } from '../../lib/format.ts';
import { areaMeaningWords, arrivalMeaningWords, periodInWords, problemInWords, stateWord } from './log-words.ts';

/** Everything that is kept of a log besides its visits, which are never shown. */
export function VisitLogReport({ log, timeZone }: { log: VisitLogDetail; timeZone: string }) {
  const facts: { name: string; value: ReactNode }[] = [
    { name: 'Period', value: periodInWords(log.period, timeZone) },
    ...(log.purgedTo === null
      ? []
      : [
          {
            name: 'Deleted after the retention time',
            value: log.status === 'purged' ? 'every visit' : `visits before ${formatDate(log.purgedTo, timeZone)}`,
          },
        ]),
    ...(log.status === 'ready' && stateWord(log) === 'Counts in part'
      ? [
          {
            name: 'Counts',
            value: `${formatList(log.counts.map((span) => periodInWords(span, timeZone)))}${log.purgedTo === null ? '; newer logs cover the rest' : ''}`,
          },
        ]
      : []),
    ...(log.kind === 'hourly counts'
      ? [
          { name: 'Holds', value: 'hourly counts: arrivals by hour and care area, no visit' },
          {
            name: 'Length of stay',
            value: log.statedStays
              ? `stated: ${formatList(log.statedStays.areas.map(({ name, meanHours }) => `${name} ${formatNumber(meanHours)} h`))} (${log.statedStays.source})`
              : 'not stated',
          },
        ]
      : [
          {
            name: 'Holds visits that',
            value: log.facts.selectedBy === 'arrived' ? 'arrived in the period' : 'departed in the period',
          },
        ]),
    { name: 'Extract taken', value: formatDateTime(log.facts.takenAt, timeZone) },
    ...(log.kind === 'hourly counts'
      ? []
      : [
          {
            name: 'A missing departure means',
            value:
              log.facts.missingDeparture === 'still present' ? 'still present when the extract was taken' : 'unknown',
          },
        ]),
    {
      name: 'Arrival time marks',
      value:
        log.facts.arrivalMeaning === null ? 'not asked' : lowerFirst(arrivalMeaningWords[log.facts.arrivalMeaning]),
    },
    ...(log.kind === 'hourly counts'
      ? []
      : [
          {
            name: 'Care area is',
            value: log.facts.areaMeaning === null ? 'not asked' : lowerFirst(areaMeaningWords[log.facts.areaMeaning]),
          },
        ]),
    { name: 'File', value: <span className="break-all">{log.fileName}</span> },
    { name: 'SHA-256 of what was received', value: <span className="tighter break-all">{log.sha256}</span> },
  ];
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {log.status === 'failed' ? (
        <Notice kind="caution" title={log.reason ?? 'The log was not loaded.'}>
          <p>Nothing of it was kept; everything loaded before is unchanged.</p>
        </Notice>
      ) : null}
      {log.status === 'withdrawn' && log.withdrawnAt !== null ? (
        <Notice title={`Withdrawn ${formatDateTime(log.withdrawnAt, timeZone)} by ${log.withdrawnBy ?? ''}.`}>
          <p>“{log.reason}” Its visits no longer count and are deleted.</p>
        </Notice>
      ) : null}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-8 lg:grid-cols-2">
        <DataTable
          caption="About this log"
          rows={facts}
          rowKey={({ name }) => name}
          columns={[
            { key: 'name', header: 'What', rowHeader: true, cell: ({ name }) => name },
            { key: 'value', header: 'Is', cell: ({ value }) => value },
          ]}
        />
        <div className="grid grid-cols-[minmax(0,1fr)] content-start gap-8">
          <DataTable
            caption={log.kind === 'hourly counts' ? 'Arrivals by care area' : 'Visits by care area'}
            rows={log.visitsByArea}
            rowKey={({ areaId }) => areaId}
            empty="No visit."
            columns={[
              { key: 'area', header: 'Care area', rowHeader: true, cell: ({ name }) => name },
              {
                key: 'visits',
                header: log.kind === 'hourly counts' ? 'Arrivals' : 'Visits',
                figure: true,
                cell: ({ visits }) => formatNumber(visits),
              },
            ]}
          />
          <DataTable
            caption={
              log.leftOutRows === 0
                ? 'Rows left out'
                : `${formatCount(log.leftOutRows, 'row')} left out; a row may have several problems`
            }
            rows={log.leftOut}
            rowKey={({ problem }) => problem}
            empty="None: every row of the file was loaded."
            columns={[
              {
                key: 'problem',
                header: 'What was wrong',
                rowHeader: true,
                cell: ({ problem }) => problemInWords(problem),
              },
              { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
            ]}
          />
        </div>
      </div>
    </div>
  );
}

const lowerFirst = (text: string) => text.charAt(0).toLowerCase() + text.slice(1);
