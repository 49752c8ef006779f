import { Link } from 'react-router-dom';
import type { RecordPart, TrackFilter, TrackRecord } from '../../../shared/api/track-record.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { searchOf } from './filter-in-address.ts';
import { partColumns } from './part-columns.tsx';

type Dimension = keyof TrackRecord['parts'];
const titles: Record<Dimension, string> = {
  lead: 'By hours ahead',
  area: 'By area',
  shift: 'By shift',
  model: 'By model',
};

/** The same figures by lead, area, shift and model; a name shows that part alone. */
export function RecordParts({ record, filter }: { record: TrackRecord; filter: TrackFilter }) {
  const shown = (Object.keys(titles) as Dimension[]).filter((dimension) => {
    const parts = record.parts[dimension];
    return parts.length > 1 || (parts.length === 1 && dimension === 'model');
  });
  if (shown.length === 0) return null;
  const alone = (dimension: Dimension, key: string): TrackFilter => ({
    ...filter,
    [dimension]: dimension === 'lead' ? Number(key) : key,
  });
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="By lead, area, shift and model">
      <h2 className="text-h2">Which parts do better or worse?</h2>
      <p className="max-w-[44rem] text-ink2">{record.verdict.parts}</p>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-12 gap-y-6 xl:grid-cols-2">
        {shown.map((dimension) => (
          <DataTable<RecordPart>
            key={dimension}
            caption={titles[dimension]}
            rows={record.parts[dimension]}
            rowKey={({ key }) => key}
            columns={[
              {
                key: 'name',
                header: 'Part',
                rowHeader: true,
                cell: ({ key, name }) => (
                  <Link
                    to={{ search: searchOf(alone(dimension, key)).toString() }}
                    replace
                    preventScrollReset
                    className="link inline-block min-h-6"
                  >
                    {name}
                  </Link>
                ),
              },
              ...partColumns,
            ]}
          />
        ))}
      </div>
    </section>
  );
}
