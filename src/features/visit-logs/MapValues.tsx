import { dispositionCode, dispositions } from '../../../shared/domain/disposition.ts';
import { notRecorded } from '../../../shared/domain/visit-row.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { fieldLook } from '../../components/Field.tsx';
import { formatNumber } from '../../lib/format.ts';
import type { FileMapping } from './check-file.ts';
import { columnOf, type AreaName } from './mapping.ts';
import type { News } from './remember-mapping.ts';
import type { FileSurvey } from './survey-file.ts';

const leaveOut = 'leave out';

/** Second step, second half: what each value of the three word columns means. */
export function MapValues({
  survey,
  mapping,
  areas,
  news,
  onChange,
}: {
  survey: FileSurvey;
  mapping: FileMapping;
  areas: readonly AreaName[];
  /** Words that the site's last file did not have. */
  news: News['values'];
  onChange: (mapping: FileMapping) => void;
}) {
  const codes = dispositions.map((name) => ({ value: String(dispositionCode[name]), label: name }));
  const none = { value: String(notRecorded), label: 'not recorded' };
  const read = (text: string) => (text === leaveOut ? null : Number(text));
  return (
    <div className="grid gap-8 lg:grid-cols-2">
      <ValueTable
        caption="Care areas"
        fresh={news.care_area}
        values={columnOf(survey, mapping, 'care_area')?.values ?? []}
        chosen={(value) => mapping.areas[value] ?? leaveOut}
        options={areas.map(({ id, name }) => ({ value: id, label: name }))}
        onChoose={(value, area) => {
          onChange({ ...mapping, areas: { ...mapping.areas, [value]: area === leaveOut ? null : area } });
        }}
      />
      <ValueTable
        caption="Dispositions"
        fresh={news.disposition}
        values={columnOf(survey, mapping, 'disposition')?.values ?? []}
        chosen={(value) => String(mapping.dispositions[value] ?? leaveOut)}
        options={[...codes, none]}
        onChoose={(value, code) => {
          onChange({ ...mapping, dispositions: { ...mapping.dispositions, [value]: read(code) } });
        }}
      />
      <ValueTable
        caption="By ambulance"
        fresh={news.arrived_by_ambulance}
        values={columnOf(survey, mapping, 'arrived_by_ambulance')?.values ?? []}
        chosen={(value) => String(mapping.ambulances[value] ?? leaveOut)}
        options={[{ value: '1', label: 'yes' }, { value: '0', label: 'no' }, none]}
        onChoose={(value, code) => {
          onChange({ ...mapping, ambulances: { ...mapping.ambulances, [value]: read(code) } });
        }}
      />
    </div>
  );
}

function ValueTable({
  caption,
  values,
  fresh,
  chosen,
  options,
  onChoose,
}: {
  caption: string;
  values: readonly { value: string; rows: number }[];
  fresh: ReadonlySet<string>;
  chosen: (value: string) => string;
  options: readonly { value: string; label: string }[];
  onChoose: (value: string, choice: string) => void;
}) {
  if (values.length === 0) return null;
  return (
    <DataTable
      caption={caption}
      rows={[...values].sort((a, b) => Number(fresh.has(b.value)) - Number(fresh.has(a.value)))}
      rowKey={({ value }) => value}
      columns={[
        {
          key: 'value',
          header: 'In the file',
          rowHeader: true,
          cell: ({ value }) => (fresh.has(value) ? `${value}, new` : value),
        },
        { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
        {
          key: 'means',
          header: 'Means',
          cell: ({ value }) => (
            <select
              aria-label={`${caption}: “${value}” means`}
              className={`${fieldLook} min-w-40`}
              value={chosen(value)}
              onChange={(event) => {
                onChoose(value, event.target.value);
              }}
            >
              {options.map((option) => (
                <option key={option.value} value={option.value}>
                  {option.label}
                </option>
              ))}
              <option value={leaveOut}>leave these rows out</option>
            </select>
          ),
        },
      ]}
    />
  );
}
