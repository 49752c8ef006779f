import { canonicalCountHeader } from '../../../shared/domain/canonical-count.ts';
import {
  countColumnNames,
  countColumns,
  countProblems,
  requiredCountColumns,
  type CountColumn,
} from '../../../shared/domain/hourly-count.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { saveFile } from '../../lib/save-file.ts';
import type { AreaName } from './mapping.ts';

const guide: Record<CountColumn, { holds: string; written: string }> = {
  care_area: { holds: 'The area that the hour is counted for.', written: 'A word or code, the same for the same area' },
  local_date: { holds: 'The date on the site’s clock.', written: '2026-03-04, or day or month first' },
  hour: { holds: 'The hour of that day: 13 means 13:00 to 13:59.', written: '0 to 23, or 13:00' },
  arrivals: { holds: 'How many patients came within the hour.', written: 'A whole number, 0 where nobody came' },
  departures: {
    holds: 'How many patients left within the hour; leave the column out if it may not be shared.',
    written: 'A whole number, for every hour of an area or for none',
  },
};

/** Hourly counts, for sites that may not share the times of visits. */
export function CountGuide({ areas }: { areas: readonly AreaName[] }) {
  const name = (index: number) => {
    const area = areas.at(index % Math.max(1, areas.length))?.name ?? 'Area';
    return area.includes(',') ? `"${area}"` : area;
  };
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Hourly counts">
      <h2 className="text-h2">Hourly counts, where times may not be shared</h2>
      <p className="max-w-[58rem] text-ink2">
        One row an hour and care area, in CSV or a workbook, every hour from the first to the last. Arrivals are
        forecast as well as from visits; of stays only the mean is known, which you state with its source, and where
        departures are counted the pace of leaving through the day. Where visits are loaded for the same time, the
        visits count.
      </p>
      <DataTable
        caption="Columns of hourly counts"
        rows={countColumns}
        rowKey={(column) => column}
        columns={[
          {
            key: 'name',
            header: 'Column',
            rowHeader: true,
            cell: (column) => (
              <>
                {countColumnNames[column]}
                {requiredCountColumns.includes(column) ? ', needed' : ''}
                <span className="block text-quiet font-medium break-all text-ink2">{column}</span>
              </>
            ),
          },
          { key: 'holds', header: 'What it holds', cell: (column) => guide[column].holds },
          { key: 'written', header: 'How it is written', cell: (column) => guide[column].written },
        ]}
      />
      <Button
        className="justify-self-start"
        onClick={() => {
          saveFile('hourly-counts-template.csv', 'text/csv', [`${canonicalCountHeader}\r\n`]);
        }}
      >
        Save the template for hourly counts
      </Button>
      <div className="prose-column">
        <pre
          className="overflow-x-auto bg-paper px-3 py-2 font-sans font-semibold text-ink"
          tabIndex={0}
          aria-label="Example rows of hourly counts"
        >
          {[
            canonicalCountHeader,
            `${name(0)},2026-03-04,0,3,4`,
            `${name(0)},2026-03-04,1,0,2`,
            `${name(1)},2026-03-04,0,1,0`,
          ].join('\n')}
        </pre>
        <p>
          On the day of 25 hours the hour that comes twice may stand in one row or in two, which are added; on the day
          of 23 hours the skipped hour has no row, or a 0. A fault in any row refuses the whole file, since an hour left
          out would look calm:
        </p>
        <ul>
          {Object.values(countProblems).map((words) => (
            <li key={words}>{words}</li>
          ))}
        </ul>
      </div>
    </section>
  );
}
