import type { ReactNode } from 'react';
import { type CountedFile } from '../../../shared/domain/hourly-count.ts';
import { hourText } from '../../../shared/domain/local-hour-span.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { Notice } from '../../components/Notice.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import { formatBytes } from './format-bytes.ts';
import type { AreaName } from './mapping.ts';

/** Third step for hourly counts: what the file covers, what a model of it cannot know, and what will be sent. */
export function CountReport({
  counted,
  rows,
  areas,
  payloadBytes,
  study,
}: {
  counted: CountedFile;
  rows: number;
  /** In the order of the report's area numbers. */
  areas: readonly AreaName[];
  payloadBytes: number;
  study: ReactNode;
}) {
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      <Notice kind="caution" title="A model of hourly counts knows less than one of visits.">
        <p>
          It forecasts arrivals as well. Of stays it knows the mean alone, as you state it: no dispositions and no
          admissions, nobody’s long stay, no waiting for a bed space. Ranges of need are less sure. Load visits where
          your data-sharing agreement lets you.
        </p>
      </Notice>
      {counted.filledHours > 0 ? (
        <Notice
          title={`${formatCount(counted.filledHours, 'hour')} without a row count as hours in which nobody came.`}
        >
          <p>You said so. If some of them were not recorded, go back and have the export write them.</p>
        </Notice>
      ) : null}
      {study}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-8 lg:grid-cols-2">
        <DataTable
          caption="Patients by care area"
          rows={counted.areas}
          rowKey={({ area }) => String(area)}
          columns={[
            { key: 'area', header: 'Care area', rowHeader: true, cell: ({ area }) => areas[area]?.name ?? '' },
            { key: 'came', header: 'Arrivals', figure: true, cell: ({ arrivals }) => formatNumber(arrivals) },
            {
              key: 'left',
              header: 'Departures',
              figure: true,
              cell: ({ departures }) => (departures === null ? 'not given' : formatNumber(departures)),
            },
          ]}
        />
        <section aria-label="What will be sent">
          <h2 className="font-bold text-ink">What will be sent</h2>
          <ul className="mt-2 list-disc pl-5 text-ink2">
            <li>
              <b className="text-ink">{formatCount(rows, 'row')}</b>, one an hour and care area,{' '}
              {formatBytes(payloadBytes)} packed
            </li>
            <li>
              local hours from {hourText(counted.firstLocalHour)} to {hourText(counted.lastLocalHour)}
            </li>
            <li>no time of any single visit</li>
          </ul>
        </section>
      </div>
    </div>
  );
}
