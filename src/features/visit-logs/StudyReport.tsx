import type { ReactNode } from 'react';
import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { acceptingChange } from '../../../shared/domain/accepting-change.ts';
import type { FileStudy, TimeSpan } from '../../../shared/domain/file-study.ts';
import type { Heap } from '../../../shared/domain/find-heaps.ts';
import { visitColumnNames } from '../../../shared/domain/visit-row.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDate, formatDateTime, formatNumber } from '../../lib/format.ts';
import { periodInWords } from './log-words.ts';
import type { AreaName } from './mapping.ts';

/** What the times of the good rows say about the file, and what accepting it would change. */
export function StudyReport({
  study,
  period,
  goodRows,
  kind = 'visits',
  logs,
  areas,
  timeZone,
}: {
  study: FileStudy;
  /** That the log would state. */
  period: TimeSpan;
  goodRows: number;
  kind?: VisitLogSummary['kind'];
  logs: readonly VisitLogSummary[];
  areas: readonly AreaName[];
  timeZone: string;
}) {
  const where = (area: number | null) => (area === null ? 'Whole department' : (areas[area]?.name ?? ''));
  return (
    <>
      <AcceptingChange {...{ study, period, goodRows, kind, logs, timeZone }} />
      {study.gaps.length + study.levelShifts.length + study.heaps.length === 0 ? (
        <p className="text-ink2">No implausible gap, sudden change of level or heaping was found in the times.</p>
      ) : null}
      {study.gaps.length > 0 ? (
        <Finding
          title={`${formatCount(study.gaps.length, 'stretch', 'stretches')} without any arrival, which chance does not explain.`}
          text="If the department was closed or the system was down, declare it on the Logs page, so that the model does not learn from it. Otherwise the export lacks rows: mend it first."
        >
          <DataTable
            caption="Hours without arrivals"
            captionHidden
            rows={study.gaps}
            rowKey={({ area, from }) => `${String(area)} ${String(from)}`}
            columns={[
              { key: 'where', header: 'Where', rowHeader: true, cell: ({ area }) => where(area) },
              { key: 'from', header: 'From', cell: ({ from }) => formatDateTime(from, timeZone) },
              { key: 'to', header: 'To', cell: ({ to }) => formatDateTime(to, timeZone) },
              { key: 'hours', header: 'Hours', figure: true, cell: ({ from, to }) => formatNumber((to - from) / 3600) },
              {
                key: 'expected',
                header: 'Arrivals expected',
                figure: true,
                cell: ({ expected }) => formatNumber(expected),
              },
            ]}
          />
        </Finding>
      ) : null}
      {study.levelShifts.length > 0 ? (
        <Finding
          title={`Arrivals change level suddenly ${study.levelShifts.length === 1 ? 'once' : `${formatNumber(study.levelShifts.length)} times`}.`}
          text="A new service, a closure nearby or another way of counting does this. If the way of counting changed, load the parts as logs of their own."
        >
          <DataTable
            caption="Sudden changes of level, arrivals a week over the four weeks before and after"
            captionHidden
            rows={study.levelShifts}
            rowKey={({ area, at }) => `${String(area)} ${String(at)}`}
            columns={[
              { key: 'where', header: 'Where', rowHeader: true, cell: ({ area }) => where(area) },
              { key: 'at', header: 'From', cell: ({ at }) => formatDate(at, timeZone) },
              { key: 'before', header: 'A week before', figure: true, cell: ({ before }) => formatNumber(before) },
              { key: 'after', header: 'A week after', figure: true, cell: ({ after }) => formatNumber(after) },
            ]}
          />
        </Finding>
      ) : null}
      {study.heaps.length > 0 ? (
        <Finding
          title="Times are heaped on some minutes: they were likely entered afterwards."
          text="Lengths of stay made of such times are rough. Ask how they are recorded; the rows can still be loaded."
        >
          <DataTable
            caption="Heaped times"
            captionHidden
            rows={study.heaps}
            rowKey={({ column, kind, minute }) => `${column} ${kind} ${String(minute)}`}
            columns={[
              { key: 'column', header: 'Time', rowHeader: true, cell: ({ column }) => visitColumnNames[column] },
              { key: 'at', header: 'Heaped', cell: heapInWords },
              { key: 'times', header: 'Rows', figure: true, cell: ({ times }) => formatNumber(times) },
              {
                key: 'expected',
                header: 'Rows expected',
                figure: true,
                cell: ({ expected }) => formatNumber(expected),
              },
            ]}
          />
        </Finding>
      ) : null}
    </>
  );
}

function Finding({ title, text, children }: { title: string; text: string; children: ReactNode }) {
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-2" aria-label={title}>
      <Notice kind="caution" title={title}>
        <p className="max-w-[58rem]">{text}</p>
      </Notice>
      {children}
    </section>
  );
}

function heapInWords({ kind, minute }: Heap): string {
  if (kind === 'full hour') return 'At full hours (:00)';
  if (kind === 'end of day') return 'At 23:59';
  const two = (value: number) => String(value).padStart(2, '0');
  return `Within 5 min of ${two(Math.floor((minute ?? 0) / 60))}:${two((minute ?? 0) % 60)}, when a shift ends`;
}

function AcceptingChange({
  study,
  period,
  goodRows,
  kind,
  logs,
  timeZone,
}: {
  study: FileStudy;
  period: TimeSpan;
  goodRows: number;
  kind: VisitLogSummary['kind'];
  logs: readonly VisitLogSummary[];
  timeZone: string;
}) {
  const change = acceptingChange(period, logs, kind);
  return (
    <section className="max-w-[58rem]" aria-label="What accepting would change">
      <h2 className="font-bold text-ink">What accepting would change</h2>
      <ul className="mt-2 list-disc pl-5 text-ink2">
        <li>
          The log covers arrivals <b className="text-ink">{periodInWords(period, timeZone)}</b>.
        </li>
        <li>
          <b className="text-ink">{formatCount(change.newHours, 'hour')}</b> and{' '}
          <b className="text-ink">{formatCount(study.newRows, 'visit')}</b> are newly covered
          {study.newRows === goodRows ? '' : `, of ${formatNumber(goodRows)} in the file`}.
        </li>
        {change.replaces.length === 0 ? <li>No loaded log is touched.</li> : null}
        {change.replaces.map(({ id, hours }) => {
          const log = logs.find((each) => each.id === id);
          if (!log) return null;
          return (
            <li key={id}>
              It takes the place of <b className="text-ink">{formatCount(hours, 'hour')}</b> of{' '}
              <span className="break-all">{log.fileName}</span> ({periodInWords(log.period, timeZone)}).
            </li>
          );
        })}
      </ul>
    </section>
  );
}
