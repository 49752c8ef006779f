import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import { FactorStrip } from '../../../shared/charts/FactorStrip.tsx';
import { IntervalMark } from '../../../shared/charts/IntervalMark.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';

/** Length of stay by area and disposition with its limits, and how departures run through the day. */
export function StreamTable({ model }: { model: ModelDetail }) {
  const nameOf = new Map(model.areas.map((area) => [area.areaId, area.name]));
  const longest = Math.max(...model.streams.map((stream) => stream.meanHigh), 1);
  const fastest = Math.max(...model.streams.flatMap((stream) => stream.departureFactor), 1);
  return (
    <DataTable
      caption="Length of stay and departures by stream"
      captionHidden
      rows={model.streams}
      rowKey={(stream) => `${stream.areaId} ${stream.disposition}`}
      columns={[
        {
          key: 'stream',
          header: 'Stream',
          rowHeader: true,
          cell: (stream) => `${nameOf.get(stream.areaId) ?? stream.areaId}, ${stream.disposition}`,
        },
        { key: 'visits', header: 'Visits', figure: true, cell: (stream) => formatNumber(stream.visits) },
        { key: 'share', header: 'Share', figure: true, cell: (stream) => `${formatNumber(stream.share * 100)}\u00a0%` },
        {
          key: 'mean',
          header: 'Mean stay, hours (95\u00a0% limits)',
          figure: true,
          cell: (stream) => (
            <span className="whitespace-nowrap">
              <b>{formatNumber(stream.meanHours, 1)}</b>{' '}
              <span className="text-ink2">
                ({formatNumber(stream.meanLow, 1)} to {formatNumber(stream.meanHigh, 1)})
              </span>
            </span>
          ),
        },
        {
          key: 'drawing',
          header: `0 to ${formatNumber(longest, 0)} h`,
          cell: (stream) => (
            <IntervalMark value={stream.meanHours} low={stream.meanLow} high={stream.meanHigh} max={longest} />
          ),
        },
        { key: 'censored', header: 'Cut short', figure: true, cell: (stream) => formatNumber(stream.censored) },
        {
          key: 'strip',
          header: 'Departures through the day',
          cell: (stream) => <FactorStrip factors={stream.departureFactor} max={fastest} />,
        },
        ...model.departureBlocks.map((block, index) => ({
          key: `block ${block}`,
          header: block,
          figure: true,
          cell: (stream: ModelDetail['streams'][number]) =>
            formatNumber(stream.departureFactor[index] ?? Number.NaN, 2),
        })),
      ]}
    />
  );
}
