import type { RecordPart, TrackRecord } from '../../../shared/api/track-record.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { partColumns } from './part-columns.tsx';

/** Hours and shifts whose risk somebody acknowledged, beside the others; where no chance was issued none can be. */
export function AcknowledgedApart({ record }: { record: TrackRecord }) {
  if (record.summary.calledFor.n === 0 && record.acknowledged.length === 0) return null;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-labelledby="acknowledged-apart">
      <h2 id="acknowledged-apart" className="text-h2">
        Acknowledged risks, told apart
      </h2>
      <p className="max-w-[44rem] text-ink2">{record.verdict.acknowledged}</p>
      {record.acknowledged.length === 0 ? null : (
        <DataTable<RecordPart>
          caption="Scores with and without an acknowledged risk"
          captionHidden
          rows={record.acknowledged}
          rowKey={({ key }) => key}
          columns={[{ key: 'name', header: 'Risk', rowHeader: true, cell: ({ name }) => name }, ...partColumns]}
        />
      )}
    </section>
  );
}
