import {
  countColumnNames,
  countColumns,
  requiredCountColumns,
  type CountColumn,
} from '../../../shared/domain/hourly-count.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { fieldLook } from '../../components/Field.tsx';
import { formatNumber } from '../../lib/format.ts';
import { Choice } from './Choice.tsx';
import { asksCountOrder, columnOfCounts, fitsCounts, remapCounts, type CountMapping } from './count-mapping.ts';
import { DateOrderQuestion } from './DateOrderQuestion.tsx';
import type { AreaName } from './mapping.ts';
import type { FileSurvey } from './survey-file.ts';

const meaning: Record<CountColumn, string> = {
  care_area: 'The care area that the hour is counted for',
  local_date: 'The date on the site’s clock',
  hour: 'The hour of that day, 0 to 23; 13 means 13:00 to 13:59',
  arrivals: 'How many patients came within the hour',
  departures: 'How many left within the hour; tells the pace of leaving through the day',
};

/** Second step for hourly counts: columns, care areas, and what a missing row means. */
export function MapCounts({
  survey,
  mapping,
  areas,
  onChange,
}: {
  survey: FileSurvey;
  mapping: CountMapping;
  areas: readonly AreaName[];
  onChange: (mapping: CountMapping) => void;
}) {
  const values = columnOfCounts(survey, mapping, 'care_area')?.values ?? [];
  return (
    <>
      <DataTable
        caption="Which column is which"
        file={false}
        rows={countColumns}
        rowKey={(column) => column}
        columns={[
          {
            key: 'ours',
            header: 'What is sent',
            rowHeader: true,
            cell: (column) => (
              <span className="block min-w-36">
                {countColumnNames[column]}
                {requiredCountColumns.includes(column) ? ', needed' : ''}
                <span className="block text-quiet font-medium text-ink2">{meaning[column]}</span>
              </span>
            ),
          },
          {
            key: 'theirs',
            header: 'Column of the file',
            cell: (column) => (
              <select
                aria-label={`Column of the file for ${countColumnNames[column]}`}
                className={`${fieldLook} max-w-md min-w-40`}
                value={mapping.columns[column] ?? ''}
                onChange={(event) => {
                  const index = event.target.value === '' ? null : Number(event.target.value);
                  onChange(remapCounts(survey, mapping, column, index, areas));
                }}
              >
                <option value="">
                  {requiredCountColumns.includes(column) ? 'Choose a column' : 'Not in the file'}
                </option>
                {survey.columns
                  .filter((candidate) => fitsCounts(candidate, column))
                  .map((candidate) => (
                    <option key={candidate.index} value={candidate.index}>
                      {candidate.header || `Column ${String(candidate.index + 1)}`}
                    </option>
                  ))}
              </select>
            ),
          },
        ]}
      />
      {asksCountOrder(survey, mapping) ? (
        <DateOrderQuestion
          order={mapping.statedOrder}
          onState={(statedOrder) => {
            onChange({ ...mapping, statedOrder });
          }}
        />
      ) : null}
      {values.length > 0 ? (
        <DataTable
          caption="Care areas"
          file={false}
          rows={values}
          rowKey={({ value }) => value}
          columns={[
            { key: 'value', header: 'In the file', rowHeader: true, cell: ({ value }) => value },
            { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
            {
              key: 'means',
              header: 'Means',
              cell: ({ value }) => (
                <select
                  aria-label={`Care areas: “${value}” means`}
                  className={`${fieldLook} min-w-40`}
                  value={mapping.areas[value] ?? ''}
                  onChange={(event) => {
                    const id = event.target.value === '' ? null : event.target.value;
                    onChange({ ...mapping, areas: { ...mapping.areas, [value]: id } });
                  }}
                >
                  <option value="">Choose an area</option>
                  {areas.map(({ id, name }) => (
                    <option key={id} value={id}>
                      {name}
                    </option>
                  ))}
                </select>
              ),
            },
          ]}
        />
      ) : null}
      <Choice
        legend="What does an hour without a row mean?"
        name="missing-hour"
        chosen={mapping.missing}
        error={undefined}
        options={[
          { value: 'not known', label: 'It should not be: a file that leaves hours out is refused' },
          { value: 'none came', label: 'Nobody came in that hour: the system writes no row for 0' },
        ]}
        onChoose={(missing) => {
          onChange({ ...mapping, missing });
        }}
      />
    </>
  );
}
