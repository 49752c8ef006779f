import { dispositionCode, dispositions } from '../../../shared/domain/disposition.ts';
import { notRecorded } from '../../../shared/domain/visit-row.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { fieldLook } from '../../components/Field.tsx';
import { formatNumber } from '../../lib/format.ts';
import type { FileMapping } from './check-file.ts';
import { columnOf, type AreaName } from './mapping.ts';
import type { News } from './remember-mapping.ts';
import type { FileSurvey } from './survey-file.ts';
import { groupWords, type WordGroup } from './word-groups.ts';

const leaveOut = 'leave out';

/** The same meaning for every spelling of a word. */
function each<T>(spellings: readonly string[], meaning: T): Record<string, T> {
  return Object.fromEntries(spellings.map((spelling) => [spelling, meaning]));
}

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
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8 lg:grid-cols-2">
      <ValueTable
        caption="Care areas"
        fresh={news.care_area}
        values={columnOf(survey, mapping, 'care_area')?.values ?? []}
        chosen={(value) => mapping.areas[value] ?? leaveOut}
        options={areas.map(({ id, name }) => ({ value: id, label: name }))}
        onChoose={(values, area) => {
          onChange({ ...mapping, areas: { ...mapping.areas, ...each(values, area === leaveOut ? null : area) } });
        }}
      />
      <ValueTable
        caption="Dispositions"
        fresh={news.disposition}
        values={columnOf(survey, mapping, 'disposition')?.values ?? []}
        chosen={(value) => String(mapping.dispositions[value] ?? leaveOut)}
        options={[...codes, none]}
        onChoose={(values, code) => {
          onChange({ ...mapping, dispositions: { ...mapping.dispositions, ...each(values, read(code)) } });
        }}
      />
      <ValueTable
        caption="By ambulance"
        fresh={news.arrived_by_ambulance}
        values={columnOf(survey, mapping, 'arrived_by_ambulance')?.values ?? []}
        chosen={(value) => String(mapping.ambulances[value] ?? leaveOut)}
        options={[{ value: '1', label: 'yes' }, { value: '0', label: 'no' }, none]}
        onChoose={(values, code) => {
          onChange({ ...mapping, ambulances: { ...mapping.ambulances, ...each(values, read(code)) } });
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
  onChoose: (spellings: readonly string[], choice: string) => void;
}) {
  if (values.length === 0) return null;
  const isFresh = ({ spellings }: WordGroup) => spellings.some((spelling) => fresh.has(spelling));
  return (
    <DataTable
      // What stands in it is the person’s own file: nothing to save again.
      file={false}
      caption={caption}
      rows={groupWords(values).sort((a, b) => Number(isFresh(b)) - Number(isFresh(a)))}
      rowKey={({ spellings }) => spellings[0]}
      columns={[
        {
          key: 'value',
          header: 'In the file',
          rowHeader: true,
          cell: (group) => (
            <>
              {isFresh(group) ? `${group.spellings[0]}, new` : group.spellings[0]}
              {group.spellings.length > 1 ? (
                <span className="block text-quiet font-medium text-ink2">
                  also written {group.spellings.slice(1).map(quoted).join(', ')}
                </span>
              ) : null}
            </>
          ),
        },
        { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
        {
          key: 'means',
          header: 'Means',
          cell: ({ spellings }) => (
            <select
              aria-label={`${caption}: “${spellings[0]}” means`}
              className={`${fieldLook} min-w-40`}
              value={chosen(spellings[0])}
              onChange={(event) => {
                onChoose(spellings, event.target.value);
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

const quoted = (text: string) => `“${text}”`;
