import { useState } from 'react';
import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import { FactorStrip } from '../../../shared/charts/FactorStrip.tsx';
import { IntervalMark } from '../../../shared/charts/IntervalMark.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';

type Stream = ModelDetail['streams'][number];

/** Length of stay by area and disposition with its limits, and how departures run through the day. */
export function StreamTable({ model }: { model: ModelDetail }) {
  const nameOf = new Map(model.areas.map((area) => [area.areaId, area.name]));
  const streamName = ({ areaId, disposition }: Stream) => `${nameOf.get(areaId) ?? areaId}, ${disposition}`;
  const longest = Math.max(...model.streams.map((stream) => stream.meanHigh), 1);
  const fastest = Math.max(...model.streams.flatMap((stream) => stream.departureFactor), 1);
  return (
    <>
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
            cell: streamName,
          },
          { key: 'visits', header: 'Visits', figure: true, cell: (stream) => formatNumber(stream.visits) },
          // Boarding is a part of the admitted patients' stay, so it has no share of arrivals of its own.
          {
            key: 'share',
            header: 'Share',
            figure: true,
            cell: (stream) => (stream.disposition === 'boarding' ? '–' : `${formatNumber(stream.share * 100)}\u00a0%`),
          },
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
        ]}
      />
      <DepartureBlocks model={model} streamName={streamName} />
    </>
  );
}

/** The figures behind the drawings of departures; a wide table, so it is opened on demand and scrolls within itself. */
function DepartureBlocks({ model, streamName }: { model: ModelDetail; streamName: (stream: Stream) => string }) {
  const [open, setOpen] = useState(false);
  return (
    <details className="mt-3" onToggle={(event) => setOpen(event.currentTarget.open)}>
      <summary className="link min-h-6 w-fit cursor-pointer font-semibold text-ink2">
        Departures by block of the day, in figures
      </summary>
      {open ? (
        <div className="pt-3">
          <DataTable
            caption="How fast patients leave in each block of hours, 1 as on average"
            rows={model.streams}
            rowKey={(stream) => `${stream.areaId} ${stream.disposition}`}
            columns={[
              { key: 'stream', header: 'Stream', rowHeader: true, cell: streamName },
              ...model.departureBlocks.map((block, index) => ({
                key: `block ${block}`,
                header: block,
                figure: true,
                cell: (stream: Stream) => formatNumber(stream.departureFactor[index] ?? Number.NaN, 2),
              })),
            ]}
          />
        </div>
      ) : null}
    </details>
  );
}
