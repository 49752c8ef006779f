import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import {
  requiredVisitColumns,
  visitColumnNames,
  visitColumns,
  type VisitColumn,
} from '../../../shared/domain/visit-row.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { fieldLook } from '../../components/Field.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';
import type { FileMapping } from './check-file.ts';
import { columnOf, fits } from './mapping.ts';
import type { ColumnSurvey, FileSurvey } from './survey-file.ts';

const meaning: Record<VisitColumn, string> = {
  arrival_at: 'When the patient arrived: at the door or at registration, the same for every row',
  bed_space_at: 'When a bed space was taken; lets waiting be modelled',
  admission_decision_at: 'When admission was decided; lets boarding be modelled',
  departure_at: 'When the patient left the department',
  care_area: 'Where the patient was cared for',
  disposition: 'How the visit ended',
  arrived_by_ambulance: 'Whether an ambulance brought the patient',
};

function holds(column: ColumnSurvey, rows: number): string {
  const filled = column.filled === rows ? 'every row' : `${formatNumber(column.filled)} of ${formatNumber(rows)} rows`;
  if (column.isTime) {
    const order = column.dateOrder === 'not needed' || column.dateOrder === 'ambiguous' ? '' : `, ${column.dateOrder}`;
    const slips =
      column.contraryDates > 0
        ? `; ${formatCount(column.contraryDates, 'date fits', 'dates fit')} the other order only`
        : '';
    return `Times in ${filled}${order}${slips}`;
  }
  return `${formatCount(column.values?.length ?? 0, 'value')} in ${filled}`;
}

/** Second step, first half: which column of the file is which. */
export function MapColumns({
  survey,
  mapping,
  onMap,
}: {
  survey: FileSurvey;
  mapping: FileMapping;
  onMap: (ours: VisitColumn, index: number | null) => void;
}) {
  const mapped = new Set(Object.values(mapping.columns));
  const dropped = survey.columns.filter((column) => !mapped.has(column.index));
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-6">
      <DataTable
        // What stands in it is the person’s own file: nothing to save again.
        file={false}
        caption="Which column is which"
        rows={visitColumns}
        rowKey={(column) => column}
        columns={[
          {
            key: 'ours',
            header: 'What is sent',
            rowHeader: true,
            cell: (column) => (
              <span className="block min-w-36">
                {visitColumnNames[column]}
                {requiredVisitColumns.includes(column) ? ', needed' : ''}
                <span className="block text-quiet font-medium text-ink2">{meaning[column]}</span>
              </span>
            ),
          },
          {
            key: 'theirs',
            header: 'Column of the file',
            cell: (column) => {
              const chosen = columnOf(survey, mapping, column);
              return (
                <>
                  <select
                    aria-label={`Column of the file for ${visitColumnNames[column]}`}
                    className={`${fieldLook} max-w-md min-w-40`}
                    value={mapping.columns[column] ?? ''}
                    onChange={(event) => {
                      onMap(column, event.target.value === '' ? null : Number(event.target.value));
                    }}
                  >
                    <option value="">
                      {requiredVisitColumns.includes(column) ? 'Choose a column' : 'Not in the file'}
                    </option>
                    {survey.columns
                      .filter((candidate) => fits(candidate, column))
                      .map((candidate) => (
                        <option key={candidate.index} value={candidate.index}>
                          {candidate.header || `Column ${String(candidate.index + 1)}`}
                        </option>
                      ))}
                  </select>
                  <span className="block pt-1 text-quiet text-ink2">{chosen ? holds(chosen, survey.rows) : '–'}</span>
                </>
              );
            },
          },
        ]}
      />
      {dropped.length > 0 ? (
        <section aria-label="Columns that are dropped" className="max-w-[58rem]">
          <h2 className="text-h2">Dropped here, never sent: {formatCount(dropped.length, 'column')}</h2>
          <ul className="mt-1 grid gap-x-8 gap-y-1 text-ink2 sm:grid-cols-2">
            {dropped.map((column) => (
              <li key={column.index}>
                <b className="text-ink">{column.header || `Column ${String(column.index + 1)}`}</b>
                {column.identifier
                  ? `: ${column.identifier.from === 'header' ? 'its name says that it holds' : 'it seems to hold'} ${withArticle(column.identifier.kind)}, so it cannot be chosen`
                  : ''}
              </li>
            ))}
          </ul>
        </section>
      ) : null}
    </div>
  );
}
