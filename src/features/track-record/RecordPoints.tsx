import { useRef } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import { RangeColumns } from '../../../shared/charts/RangeColumns.tsx';
import type { TrackRecord } from '../../../shared/api/track-record.ts';
import { ChartReader } from '../../components/ChartReader.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { PictureTools } from '../../components/PictureTools.tsx';
import { formatDay, formatTime } from '../../lib/format.ts';
import { paths } from '../../app/paths.ts';
import { percent } from './figures.ts';

type Point = TrackRecord['points'][number];
const columnWidth = 15;

/** The newest forecasts one by one, range and what came; each opens as it was shown then. */
export function RecordPoints({ record, siteId, timeZone }: { record: TrackRecord; siteId: string; timeZone: string }) {
  const ref = useRef<HTMLDivElement>(null);
  const navigate = useNavigate();
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
          <div ref={ref} className="w-max">
            <ChartReader
              label="The newest forecasts"
              columnWidth={columnWidth}
              start={34}
              first={drawn.length - 1}
              onOpen={(index) => {
                const point = points.find((candidate) => keyOf(candidate) === drawn[index].key);
                const href = point ? hrefOf(siteId, point) : null;
                if (href !== null) void navigate(href);
              }}
              readings={drawn.map((column) => {
                const point = points.find((candidate) => keyOf(candidate) === column.key);
                return {
                  name: point ? nameOf(point, timeZone) : '',
                  text: `90\u00a0% range ${String(column.low90)} to ${String(column.high90)}, median ${String(column.median)}; ${String(column.observed)} came${point?.acknowledged ? '; acknowledged' : ''}`,
                };
              })}
            >
              <RangeColumns columns={drawn} columnWidth={columnWidth} />
            </ChartReader>
          </div>
        </div>
      )}
      {drawn.length === 0 ? null : <PictureTools of={ref} title="The newest forecasts, one by one" />}
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
                  const href = hrefOf(siteId, point);
                  return href ? (
                    <Link to={href} className="link inline-block min-h-6">
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

/** Where the forecast stands as it was shown then. */
function hrefOf(siteId: string, { outlookId, weekOutlookId }: Point): string | null {
  if (outlookId !== null) return paths.tonightThen(siteId, outlookId);
  return weekOutlookId === null ? null : paths.weekThen(siteId, weekOutlookId);
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
