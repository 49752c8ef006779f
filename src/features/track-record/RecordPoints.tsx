import { useState } from 'react';
import { Link } from 'react-router-dom';
import { RangeColumns, rangeHeight } from '../../../shared/charts/RangeColumns.tsx';
import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDay, formatTime } from '../../lib/format.ts';
import { paths } from '../../app/paths.ts';
import { percent } from './figures.ts';

type Point = TrackRecord['points'][number];
const columnWidth = 15;

/** The newest forecasts one by one, range and what came; each opens as it was shown then. */
export function RecordPoints({ record, siteId, timeZone }: { record: TrackRecord; siteId: string; timeZone: string }) {
  const [chosen, setChosen] = useState<string | null>(null);
  const points = [...record.points].reverse();
  const drawn = points.flatMap((point, index) => {
    const { low90, high90, low50, high50, median } = point;
    if (low90 === null || high90 === null || low50 === null || high50 === null || median === null) return [];
    return [
      {
        key: keyOf(point),
        label: index % 9 === 0 ? formatDay(point.from, timeZone, 'short').slice(4) : '',
        low90,
        high90,
        low50,
        high50,
        median,
        observed: point.observed,
      },
    ];
  });
  const isChance = record.filter.measure === 'peak' && drawn.length === 0;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="The newest forecasts one by one">
      <h2 className="text-h2">The newest, one by one</h2>
      <p className="max-w-[44rem] text-ink2">
        {isChance
          ? 'For the department as a whole a chance was issued and no range.'
          : 'The pale bar is the 90 % range, the darker one the middle half, the dot what came; a cross came outside.'}{' '}
        Press a column, or a line of the table, to open the forecast as it was shown then.
      </p>
      {drawn.length === 0 ? null : (
        <div className="overflow-x-auto" role="region" aria-label="Ranges and what came" tabIndex={0}>
          <div className="relative w-max">
            <RangeColumns columns={drawn} columnWidth={columnWidth} chosen={chosen} />
            {drawn.map((column, index) => {
              const point = points.find((candidate) => keyOf(candidate) === column.key);
              return point?.outlookId ? (
                <Link
                  key={column.key}
                  to={paths.tonightThen(siteId, point.outlookId)}
                  tabIndex={-1}
                  aria-hidden="true"
                  className="absolute top-0"
                  style={{ left: 34 + index * columnWidth, width: columnWidth, height: rangeHeight }}
                  onPointerEnter={() => {
                    setChosen(column.key);
                  }}
                  onPointerLeave={() => {
                    setChosen(null);
                  }}
                />
              ) : null;
            })}
          </div>
        </div>
      )}
      <details>
        <summary className="link inline-block min-h-6 cursor-pointer font-semibold text-ink2">
          The same as a table, each opening its forecast
        </summary>
        <div className="pt-2">
          <DataTable<Point>
            caption="The newest scored forecasts"
            captionHidden
            rows={record.points}
            rowKey={keyOf}
            columns={[
              {
                key: 'at',
                header: 'Of',
                rowHeader: true,
                cell: (point) => {
                  const name = nameOf(point, timeZone);
                  return point.outlookId ? (
                    <Link to={paths.tonightThen(siteId, point.outlookId)} className="link inline-block min-h-6">
                      {name}
                    </Link>
                  ) : (
                    name
                  );
                },
              },
              {
                key: 'range',
                header: '90\u00a0% range',
                figure: true,
                cell: ({ low90, high90 }) =>
                  low90 === null || high90 === null ? '–' : `${String(low90)} to ${String(high90)}`,
              },
              { key: 'median', header: 'Median', figure: true, cell: ({ median }) => median ?? '–' },
              {
                key: 'came',
                header: 'Came',
                figure: true,
                cell: (point) => (point.median === null ? '–' : <b>{point.observed}</b>),
              },
              {
                key: 'chance',
                header: 'Chance of shortfall',
                figure: true,
                cell: ({ chance }) => percent(chance, 0),
              },
              {
                key: 'short',
                header: 'Shortfall',
                cell: ({ short, acknowledged }) =>
                  `${short === null ? '–' : short ? 'yes' : 'no'}${acknowledged ? ', acknowledged' : ''}`,
              },
              {
                key: 'how',
                header: 'Issued',
                cell: ({ recomputed }) => (recomputed ? 'recomputed later' : 'at the time'),
              },
            ]}
          />
        </div>
      </details>
    </section>
  );
}

function keyOf(point: Point): string {
  return `${String(point.from)} ${point.outlookId ?? point.weekOutlookId ?? ''}`;
}

function nameOf({ from, to }: Point, timeZone: string): string {
  const day = formatDay(from, timeZone, 'short');
  if (to - from > 20 * 3600) return day;
  return from === to
    ? `${day}, ${formatTime(from, timeZone)}`
    : `${day}, ${formatTime(from, timeZone)} to ${formatTime(to, timeZone)}`;
}
