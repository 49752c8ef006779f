import type { ReactNode } from 'react';
import type { ProblemCount, VisitReport } from '../../../shared/domain/visit-report.ts';
import { rowProblems, visitColumnNames, visitColumns } from '../../../shared/domain/visit-row.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatDateTime, formatNumber } from '../../lib/format.ts';
import { formatBytes } from './format-bytes.ts';
import type { FileMapping, RepeatedHour } from './check-file.ts';
import type { AreaName } from './mapping.ts';

const repeatedAnswers: Record<RepeatedHour, string> = {
  refuse: 'It is not known: leave these rows out',
  earlier: 'The first of the two hours',
  later: 'The second of the two hours',
};

/** Third step: what is wrong with rows and how often, what the file covers, and what will be sent. */
export function CheckReport({
  report,
  mapping,
  areas,
  timeZone,
  payloadBytes,
  study,
  onRepeatedHour,
  onSaveRows,
}: {
  report: VisitReport;
  mapping: FileMapping;
  /** In the order of the report's area numbers. */
  areas: readonly AreaName[];
  timeZone: string;
  payloadBytes: number;
  /** What the times say; stands before the figures of the file. */
  study: ReactNode;
  onRepeatedHour: (choice: RepeatedHour) => void;
  /** Saves the numbers of the problem rows, of one kind or all (null). */
  onSaveRows: (kind: ProblemCount | null) => void;
}) {
  const asksRepeated =
    mapping.repeatedHour !== 'refuse' || report.problems.some(({ problem }) => problem === 'time repeated');
  const sent = visitColumns.filter((column) => mapping.columns[column] !== null);
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {asksRepeated ? (
        <fieldset className="grid max-w-[58rem] gap-1 border-l-4 border-ink py-1 pl-3">
          <legend className="sr-only">The hour that came twice</legend>
          <p className="font-extrabold text-ink">
            Some times lie in the hour that came twice when the clocks went back.
          </p>
          <p className="text-ink2">The file does not say which of the two was meant. What does your system record?</p>
          {(['earlier', 'later', 'refuse'] as const).map((choice) => (
            <label key={choice} className="flex min-h-11 items-center gap-3">
              <input
                type="radio"
                name="repeated-hour"
                className="size-5 accent-act"
                checked={mapping.repeatedHour === choice}
                onChange={() => {
                  onRepeatedHour(choice);
                }}
              />
              {repeatedAnswers[choice]}
            </label>
          ))}
        </fieldset>
      ) : null}
      {report.problems.length > 0 ? (
        <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Problem rows">
          <DataTable
            caption="Problem rows, by kind"
            rows={report.problems}
            rowKey={({ problem, column }) => `${problem} ${column ?? ''}`}
            columns={[
              { key: 'problem', header: 'What is wrong', rowHeader: true, cell: ({ problem }) => rowProblems[problem] },
              {
                key: 'column',
                header: 'Column',
                cell: ({ column }) => (column === null ? 'Row' : visitColumnNames[column]),
              },
              { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
              {
                key: 'examples',
                header: 'For example row',
                cell: ({ examples }) => examples.map((row) => formatNumber(row)).join('; '),
              },
              {
                key: 'save',
                header: 'All rows of the kind',
                cell: (kind) => (
                  <Button
                    look="quiet"
                    aria-label={`Save as CSV the rows of: ${kind.column === null ? 'Row' : visitColumnNames[kind.column]}, ${rowProblems[kind.problem]}`}
                    onClick={() => {
                      onSaveRows(kind);
                    }}
                  >
                    CSV
                  </Button>
                ),
              },
            ]}
          />
          <Button
            look="second"
            className="justify-self-start"
            onClick={() => {
              onSaveRows(null);
            }}
          >
            Save all problem rows as CSV
          </Button>
          <p className="text-quiet text-ink2">
            Row number, column and kind; no value. Row 1 is the first after the header.
          </p>
        </section>
      ) : null}
      {report.identicalRows > 0 ? (
        <Notice title={`${formatCount(report.identicalRows, 'row equals', 'rows equal')} another in every column.`}>
          <p>True twins exist, so they are kept. If the export doubles rows, correct it first.</p>
        </Notice>
      ) : null}
      {study}
      {report.goodRows > 0 ? (
        <div className="grid grid-cols-[minmax(0,1fr)] gap-8 lg:grid-cols-2">
          <DataTable
            caption="Visits by care area"
            rows={report.visitsByArea}
            rowKey={({ area }) => String(area)}
            columns={[
              { key: 'area', header: 'Care area', rowHeader: true, cell: ({ area }) => areas[area]?.name ?? '' },
              { key: 'visits', header: 'Visits', figure: true, cell: ({ visits }) => formatNumber(visits) },
            ]}
          />
          <section aria-label="What will be sent">
            <h2 className="font-bold text-ink">What will be sent</h2>
            <ul className="mt-2 list-disc pl-5 text-ink2">
              <li>
                <b className="text-ink">{formatCount(report.goodRows, 'row')}</b>, {formatBytes(payloadBytes)} packed
              </li>
              <li>{sent.map((column) => visitColumnNames[column]).join(', ')}</li>
              <li>
                first arrival {formatDateTime(report.firstArrivalAt ?? 0, timeZone)}, last{' '}
                {formatDateTime(report.lastArrivalAt ?? 0, timeZone)}
              </li>
              <li>{formatCount(report.goodRows - report.recorded.departure, 'visit')} without a departure</li>
            </ul>
          </section>
        </div>
      ) : null}
    </div>
  );
}
