import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { riskInWords } from '../../../shared/forecasting/week-sentence.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber, formatSigned } from '../../lib/format.ts';
import type { WeekArea, WeekBoard } from './week-board.ts';

/** Every shift of the days shown: planned, need at P90, headroom, beds for the risk, chance; area by area. */
export function EveryShift({ board, outlook }: { board: WeekBoard; outlook: WeekOutlook }) {
  const risk = riskInWords(outlook.result.planningRisk);
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      {board.areas.map((row) => (
        <ShiftTable key={row.area.id} row={row} board={board} outlook={outlook} risk={risk} />
      ))}
    </div>
  );
}

function ShiftTable({
  row,
  board,
  outlook,
  risk,
}: {
  row: WeekArea;
  board: WeekBoard;
  outlook: WeekOutlook;
  risk: string;
}) {
  const { waits, areas } = outlook.result;
  const own = waits?.areas[areas.findIndex(({ areaId }) => areaId === row.area.id)];
  const figure = (key: string, header: string, cell: (index: number) => string) => ({
    key,
    header,
    figure: true,
    cell,
  });
  return (
    <DataTable<number>
      caption={row.area.name}
      rows={row.shifts.map((_, index) => index)}
      rowKey={(index) => String(board.ahead[index].from)}
      columns={[
        {
          key: 'shift',
          header: 'Shift',
          rowHeader: true,
          cell: (index) => <span className="whitespace-nowrap">{board.ahead[index].fullName}</span>,
        },
        figure('planned', 'Planned', (index) => formatNumber(row.shifts[index].staffedLeast)),
        figure('p50', 'Median of the peak', (index) => formatNumber(row.shifts[index].peak.p50)),
        figure('p90', 'P90', (index) => formatNumber(row.shifts[index].peak.p90)),
        figure('p95', 'P95', (index) => formatNumber(row.shifts[index].peak.p95)),
        figure('headroom', 'Headroom', (index) => formatSigned(row.shifts[index].headroom)),
        figure('staff', `To staff at ${risk}`, (index) => formatNumber(row.shifts[index].bedsToStaff)),
        figure('add', 'To add', (index) => formatNumber(row.shifts[index].bedsToAdd)),
        {
          key: 'chance',
          header: 'Some time short',
          figure: true,
          cell: (index) => {
            const { someTime } = row.shifts[index];
            return (
              <span className="whitespace-nowrap">
                {formatChance(someTime)}, {riskWord(someTime)}
              </span>
            );
          },
        },
        ...(waits
          ? [
              figure('wait', `Wait over ${formatNumber(waits.limitMinutes)} min`, (index) => {
                const share = own?.[board.places[index]].overLimit;
                return share === undefined || share === null ? 'not known' : formatChance(share);
              }),
            ]
          : []),
      ]}
    />
  );
}

/** Arrivals by day with their intervals, whole department, areas and ambulances: the proof behind the fan. */
export function ArrivalDays({ outlook, site, until }: { outlook: WeekOutlook; site: Site; until: number }) {
  const { spans, total, areas, ambulance } = outlook.result.arrivals.days;
  const rows = spans.flatMap((span, index) => (span.from < until ? [index] : []));
  const nameOf = (a: number) => {
    const { areaId } = outlook.result.areas[a];
    return site.areas.find(({ id }) => id === areaId)?.name ?? areaId;
  };
  const range = (columns: typeof total, index: number) =>
    `${formatNumber(columns.p50[index])} (${formatNumber(columns.p2_5[index])}–${formatNumber(columns.p97_5[index])})`;
  return (
    <DataTable<number>
      caption="Arrivals by day: middle figure and 95 % range"
      rows={rows}
      rowKey={(index) => spans[index].name}
      columns={[
        {
          key: 'day',
          header: 'Day',
          rowHeader: true,
          cell: (index) => (
            <span className="whitespace-nowrap">
              {spans[index].name}
              {index === 0 ? ', what is left of it' : ''}
            </span>
          ),
        },
        { key: 'total', header: 'All', figure: true, cell: (index) => range(total, index) },
        {
          key: 'fifty',
          header: '50 %',
          figure: true,
          cell: (index) => `${formatNumber(total.p25[index])}–${formatNumber(total.p75[index])}`,
        },
        {
          key: 'eighty',
          header: '80 %',
          figure: true,
          cell: (index) => `${formatNumber(total.p10[index])}–${formatNumber(total.p90[index])}`,
        },
        ...(ambulance
          ? [
              {
                key: 'ambulance',
                header: 'By ambulance',
                figure: true,
                cell: (index: number) => range(ambulance, index),
              },
            ]
          : []),
        ...areas.map((columns, a) => ({
          key: `area ${String(a)}`,
          header: nameOf(a),
          figure: true,
          cell: (index: number) => range(columns, index),
        })),
      ]}
    />
  );
}
