import type { getVisitLogPresence } from '../../../shared/api/visit-log-presence.ts';
import type { ReplyOf } from '../../../shared/api/contract.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatDateTime, formatNumber, formatSigned } from '../../lib/format.ts';

type Compared = ReplyOf<typeof getVisitLogPresence>['compared'];

/** Present by the logs beside what was counted: an extract that misses patients, or an area that means something else, shows here. */
export function PresenceCheck({ compared, timeZone }: { compared: Compared; timeZone: string }) {
  const areas = [...new Map(compared.map(({ areaId, name }) => [areaId, name]))];
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Present: the log against the censuses">
      <h2 className="text-h2">Present: the log against the censuses</h2>
      {compared.length === 0 ? (
        <p className="max-w-[58rem] text-ink2">
          No census was entered in the time for which this log counts, or the longest stay has not passed since its
          start. There is nothing to compare.
        </p>
      ) : (
        <>
          <p className="max-w-[58rem] text-ink2">
            Who was present by arrival and departure times, beside who was counted. A difference that keeps its sign
            means that the log and the census do not count the same patients: another area, another moment of arrival or
            departure, or visits that the extract lacks.
          </p>
          <DataTable
            caption="Mean difference by area"
            rows={areas}
            rowKey={([areaId]) => areaId}
            columns={[
              { key: 'area', header: 'Care area', rowHeader: true, cell: ([, name]) => name },
              {
                key: 'counts',
                header: 'Censuses',
                figure: true,
                cell: ([areaId]) => formatNumber(of(compared, areaId).length),
              },
              {
                key: 'counted',
                header: 'Counted, mean',
                figure: true,
                cell: ([areaId]) => mean(of(compared, areaId), (row) => row.counted),
              },
              {
                key: 'log',
                header: 'In the log, mean',
                figure: true,
                cell: ([areaId]) => mean(of(compared, areaId), (row) => row.inLog),
              },
              {
                key: 'difference',
                header: 'Log minus census, mean',
                figure: true,
                cell: ([areaId]) => mean(of(compared, areaId), (row) => row.inLog - row.counted),
              },
            ]}
          />
          <details>
            <summary className="link inline-block min-h-6 cursor-pointer font-bold text-ink">
              {formatCount(compared.length, 'count')} one by one
            </summary>
            <DataTable
              caption="Every census"
              captionHidden
              rows={compared}
              rowKey={({ takenAt, areaId }) => `${String(takenAt)} ${areaId}`}
              columns={[
                {
                  key: 'at',
                  header: 'Taken',
                  rowHeader: true,
                  cell: ({ takenAt }) => formatDateTime(takenAt, timeZone),
                },
                { key: 'area', header: 'Care area', cell: ({ name }) => name },
                { key: 'counted', header: 'Counted', figure: true, cell: ({ counted }) => formatNumber(counted) },
                { key: 'log', header: 'In the log', figure: true, cell: ({ inLog }) => formatNumber(inLog) },
                {
                  key: 'difference',
                  header: 'Log minus census',
                  figure: true,
                  cell: ({ counted, inLog }) => formatSigned(inLog - counted),
                },
              ]}
            />
          </details>
        </>
      )}
    </section>
  );
}

const of = (compared: Compared, areaId: string) => compared.filter((row) => row.areaId === areaId);

function mean(rows: Compared, value: (row: Compared[number]) => number): string {
  return formatNumber(rows.reduce((sum, row) => sum + value(row), 0) / Math.max(1, rows.length), 1);
}
