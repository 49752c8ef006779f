import { canonicalHeader } from '../../../shared/domain/canonical-visit.ts';
import {
  requiredVisitColumns,
  rowProblems,
  visitColumnNames,
  visitColumns,
  type VisitColumn,
} from '../../../shared/domain/visit-row.ts';
import { visitLogLimits } from '../../../shared/api/visit-logs.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';
import { CountGuide } from './CountGuide.tsx';
import type { AreaName } from './mapping.ts';
import { saveFile } from '../../lib/save-file.ts';

const guide: Record<VisitColumn, { holds: string; written: string; lets: string }> = {
  arrival_at: {
    holds:
      'When the patient arrived: the ambulance at the door, the offload or the registration, the same for every row.',
    written: 'A date and time of day',
    lets: 'Arrivals by hour of the week',
  },
  bed_space_at: {
    holds: 'When the patient took a bed space or chair; empty if never.',
    written: 'A date and time of day',
    lets: 'Patients who wait for a space, apart from those in one',
  },
  admission_decision_at: {
    holds: 'When it was decided to admit the patient; empty if not admitted.',
    written: 'A date and time of day',
    lets: 'Boarding, and what earlier ward beds would bring',
  },
  departure_at: {
    holds: 'When the patient left the department; empty if still present or unknown (you are asked which).',
    written: 'A date and time of day',
    lets: 'Length of stay, and so the need for beds',
  },
  care_area: {
    holds:
      'The area that cared for the patient; if there were several, the first, the longest or the last (you are asked which).',
    written: 'A word or code, the same for the same area',
    lets: 'Need by area',
  },
  disposition: {
    holds:
      'How the visit ended: home, admitted, transferred, left before treatment. A death is mapped to “not recorded”.',
    written: 'A word or code',
    lets: 'Stays that differ by how they end; admissions by day',
  },
  arrived_by_ambulance: {
    holds: 'Whether an ambulance brought the patient.',
    written: 'Yes or no, or the words of your system',
    lets: 'Arrivals by ambulance',
  },
};

/** What a log holds, how it may be written, what is refused, and an empty file to fill. */
export function ColumnGuide({ areas }: { areas: readonly AreaName[] }) {
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Columns">
        <DataTable
          caption="Columns"
          rows={visitColumns}
          rowKey={(column) => column}
          columns={[
            {
              key: 'name',
              header: 'Column',
              rowHeader: true,
              cell: (column) => (
                <>
                  {visitColumnNames[column]}
                  {requiredVisitColumns.includes(column) ? ', needed' : ''}
                  <span className="block text-quiet font-medium break-all text-ink2">{column}</span>
                </>
              ),
            },
            { key: 'holds', header: 'What it holds', cell: (column) => guide[column].holds },
            { key: 'written', header: 'How it is written', cell: (column) => guide[column].written },
            { key: 'lets', header: 'What it is for', cell: (column) => guide[column].lets },
          ]}
        />
        <p className="max-w-[58rem] text-ink2">
          One row a visit. Your file may name its columns as it likes and hold others: you say which is which, and the
          others are dropped before anything is sent. A file with the names in small print needs no mapping.
        </p>
        <Button
          className="justify-self-start"
          onClick={() => {
            saveFile('visit-log-template.csv', 'text/csv', [`${canonicalHeader}\r\n`]);
          }}
        >
          Save the template (CSV, header only)
        </Button>
      </section>
      <CountGuide areas={areas} />
      <div className="prose-column">
        <h2 className="mt-5 mb-1 text-h2">Three visits as an example</h2>
        <pre
          className="overflow-x-auto bg-paper px-3 py-2 font-sans font-semibold text-ink"
          tabIndex={0}
          aria-label="Example rows"
        >
          {exampleRows(areas).join('\n')}
        </pre>
        <h2 className="mt-5 mb-1 text-h2">Files</h2>
        <ul>
          <li>
            CSV (RFC 4180) with commas, semicolons, tabs or bars, in UTF-8 or Windows-1252, gzipped or not. The first
            row is the header.
          </li>
          <li>
            An .xlsx workbook: its first sheet, the first row with a cell being the header. Cells formatted as dates are
            read as the site’s local times. A sheet holds 1,048,575 visits at most; use CSV for more.
          </li>
          <li>
            HL7 FHIR R4 Encounter resources as NDJSON, one a line, gzipped or not. Encounters of class EMER are taken,
            and of them period, location (the first, the longest or the last; a location of physical type “bd” as the
            bed space) and hospitalization.dischargeDisposition. Every other element is dropped in the browser.
          </li>
          <li>
            Up to {formatNumber(visitLogLimits.bytes / 1e6)} MB of text to send and three million rows. Split longer
            histories by period: where logs overlap, the newest counts.
          </li>
        </ul>
        <h2 className="mt-5 mb-1 text-h2">Times</h2>
        <ul>
          <li>ISO 8601 with Z or an offset (2026-03-04T10:30:00Z) is read as it stands.</li>
          <li>
            Without an offset it is the site’s local time: 2026-03-04 10:30, 04/03/2026 10:30, 3/4/2026 10:30 AM,
            4-Mar-2026 10:30. Whether the day or the month comes first is found from the file, and asked only if it
            cannot be.
          </li>
          <li>
            The hour that comes twice when the clocks go back is asked about. A time that the clocks skipped is a
            problem row.
          </li>
        </ul>
        <h2 className="mt-5 mb-1 text-h2">What refuses a file</h2>
        <p>
          Names, dates of birth, record, insurance and national patient numbers, telephone numbers, e-mail, web and IP
          addresses, postal addresses, postcodes and free text, in a header or in a value of a column that is mapped.
          The column and the kind are named, never the value; nothing of the file is kept.
        </p>
        <h2 className="mt-5 mb-1 text-h2">What makes a problem row</h2>
        <p>You may leave such rows out and load the others, or correct the file.</p>
        <ul>
          {Object.values(rowProblems).map((words) => (
            <li key={words}>{words}</li>
          ))}
        </ul>
        <p>
          Times to the minute can identify people under some rules (in the United States they make a limited data set,
          45 CFR 164.514(e)). Follow your data-sharing agreement.
        </p>
      </div>
    </div>
  );
}

/** Invented visits in the site's own areas. */
function exampleRows(areas: readonly AreaName[]): string[] {
  const name = (index: number) => {
    const area = areas.at(index % Math.max(1, areas.length))?.name ?? 'Area';
    return area.includes(',') ? `"${area}"` : area;
  };
  return [
    canonicalHeader,
    `2026-03-04T10:30:00Z,2026-03-04T10:55:00Z,,2026-03-04T13:10:00Z,${name(0)},home,no`,
    `2026-03-04T11:05:00Z,2026-03-04T11:10:00Z,2026-03-04T14:00:00Z,2026-03-04T19:45:00Z,${name(1)},admitted,yes`,
    `2026-03-04T11:40:00Z,,,,${name(0)},,no`,
  ];
}
