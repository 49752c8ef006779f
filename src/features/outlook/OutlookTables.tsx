import type { Site } from '../../../shared/api/sites.ts';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime, formatNumber, formatSigned } from '../../lib/format.ts';
import type { Board, BoardArea } from './tonight-board.ts';

/** Every figure of the hours ahead, area by area: the proof behind the drawing. */
export function OutlookTables({ board, site, hourNames }: { board: Board; site: Site; hourNames: readonly string[] }) {
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {board.areas.map((row) => (
        <AreaTable key={row.area.id} {...{ row, site, hourNames }} />
      ))}
      <p className="text-quiet text-ink2">
        Percentiles of need, patients who would be in the area with bed spaces unlimited. Staffed beds are those in
        force at each full hour. Times are those of {site.name} ({site.timeZone}).
      </p>
    </div>
  );
}

/** At the head of every file: whose figures, and the cautions that go with them. */
function fileHead(row: BoardArea, site: Site): string[] {
  return [
    `Shoalmark, tonight, ${site.name}, ${row.area.name}; times of ${site.timeZone}`,
    ...(row.counted ? [] : ['The area was not counted: these are the figures that the model expects.']),
    'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
    'A forecast is a range. Act on the percentile your policy names, not on the median alone. It does not foresee a major incident or a sudden closure: use your incident plan.',
    'A low chance is not a reason to staff below your safe minimum.',
  ];
}

function AreaTable({ row, site, hourNames }: { row: BoardArea; site: Site; hourNames: readonly string[] }) {
  const ahead = row.columns.filter((column) => column.kind === 'forecast');
  const percentile = (key: 'p5' | 'p25' | 'p50' | 'p75' | 'p90' | 'p95', header: string) => ({
    key,
    header,
    figure: true,
    cell: (index: number) => formatNumber(ahead[index][key]),
    value: (index: number) => ahead[index][key],
  });
  return (
    <DataTable<number>
      caption={row.counted ? row.area.name : `${row.area.name}: not counted, as the model expects`}
      rows={ahead.map((_, index) => index)}
      rowKey={(index) => hourNames[index]}
      file={{
        fileName: `tonight-${row.area.name.toLowerCase().replaceAll(/[^a-z0-9]+/g, '-')}.csv`,
        head: fileHead(row, site),
      }}
      columns={[
        {
          key: 'hour',
          header: 'At',
          rowHeader: true,
          cell: (index) => <span className="whitespace-nowrap">{hourNames[index]}</span>,
          value: (index) => formatDateTime(ahead[index].at, site.timeZone),
        },
        percentile('p5', 'P5'),
        percentile('p25', 'P25'),
        percentile('p50', 'Median'),
        percentile('p75', 'P75'),
        percentile('p90', 'P90'),
        percentile('p95', 'P95'),
        {
          key: 'staffed',
          header: 'Staffed',
          figure: true,
          cell: (index) => formatNumber(ahead[index].staffed),
          value: (index) => ahead[index].staffed,
        },
        {
          key: 'headroom',
          header: 'Headroom',
          figure: true,
          cell: (index) => formatSigned(row.headroom[index]),
          value: (index) => row.headroom[index],
        },
        {
          key: 'chance',
          header: row.area.spaces <= 8 ? 'Chance within the hour' : 'Chance of shortfall',
          figure: true,
          value: (index) => row.chances[index].chance,
          cell: (index) => {
            const { chance, se } = row.chances[index];
            const word = row.counted ? `, ${riskWord(chance)}` : '';
            return (
              <span className="whitespace-nowrap">
                {formatChance(chance)}
                {word} (± {formatNumber(se * 196, 1)})
              </span>
            );
          },
        },
        {
          key: 'add',
          header: 'Beds to add',
          figure: true,
          cell: (index) => formatNumber(row.bedsToAdd[index]),
          value: (index) => row.bedsToAdd[index],
        },
        {
          key: 'missing',
          header: 'Of which do not exist',
          figure: true,
          cell: (index) => formatNumber(row.bedsThatDoNotExist[index]),
          value: (index) => row.bedsThatDoNotExist[index],
        },
      ]}
    />
  );
}
