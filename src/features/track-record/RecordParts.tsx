import { Link } from 'react-router-dom';
import type { RecordPart, TrackFilter, TrackRecord } from '../../../shared/api/track-record.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';
import { figure, percent } from './figures.ts';
import { searchOf } from './filter-in-address.ts';

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
              { key: 'n', header: 'Scores', figure: true, cell: ({ n }) => formatNumber(n) },
              {
                key: 'held',
                header: '90\u00a0% range held',
                figure: true,
                cell: (part) => (
                  <span className="whitespace-nowrap">
                    <b>{percent(part.coverage90)}</b> <span className="text-ink2">of {percent(part.expected90)}</span>
                  </span>
                ),
              },
              {
                key: 'mase',
                header: 'MASE (floor)',
                figure: true,
                cell: (part) => (
                  <span className="whitespace-nowrap">
                    {figure(part.mase)} <span className="text-ink2">({figure(part.floorMase)})</span>
                  </span>
                ),
              },
              {
                key: 'chance',
                header: 'Shortfall said, came',
                figure: true,
                cell: (part) =>
                  part.meanChance === null ? '–' : `${percent(part.meanChance, 0)}, ${percent(part.share, 0)}`,
              },
            ]}
          />
        ))}
      </div>
    </section>
  );
}
