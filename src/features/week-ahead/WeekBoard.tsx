import { useState } from 'react';
import type { WeekAhead, WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { ArrivalFan } from '../../../shared/charts/ArrivalFan.tsx';
import type { FanHour } from '../../../shared/charts/ArrivalFan.tsx';
import { WeekRibbon } from '../../../shared/charts/WeekRibbon.tsx';
import type { WeekRibbonEvent } from '../../../shared/charts/WeekRibbon.tsx';
import { BoardRow } from '../../components/BoardRow.tsx';
import { Button } from '../../components/Button.tsx';
import { ChartReader } from '../../components/ChartReader.tsx';
import { PanelBoundary } from '../../components/PanelBoundary.tsx';
import { PictureTools } from '../../components/PictureTools.tsx';
import { formatDay, formatNumber, formatTime } from '../../lib/format.ts';
import { useMediaQuery } from '../../lib/use-media-query.ts';
import { useRibbon } from '../../lib/use-ribbon.ts';
import type { WeekBoard as Board } from './week-board.ts';
import { WeekAreaRow } from './WeekAreaRow.tsx';
import { WeekDepartmentRow } from './WeekDepartmentRow.tsx';

/** The week as a board: one column a shift; ribbon, department, areas in the site's own order, arrivals. */
export function WeekBoard({
  board,
  week,
  outlook,
  site,
  worstAreaId,
  then,
}: {
  board: Board;
  week: WeekAhead;
  outlook: WeekOutlook;
  site: Site;
  /** The area that opens itself. */
  worstAreaId: string | null;
  /** An earlier week as it stood. */
  then: boolean;
}) {
  const desktop = useMediaQuery('(min-width: 1100px)');
  const columnWidth = desktop ? 38 : 40;
  const { ref, ...ribbon } = useRibbon(columnWidth, 0, board.ahead.at(0)?.from);
  // Only what was pressed is kept: the worst area opens itself, also when it becomes another.
  const [pressed, setPressed] = useState<Record<string, boolean>>({});
  const columns = [...board.past, ...board.ahead];
  const names = board.ahead.map(({ fullName }) => fullName);
  const events = outlook.result.calendar.flatMap((day): WeekRibbonEvent[] => {
    const own = columns.flatMap(({ date }, index) => (date === day.date ? [index] : []));
    if (own.length === 0) return [];
    const unknown = day.basis !== 'learned';
    const text = unknown ? `${day.name}: unlike any day in the log` : day.name;
    return [{ column: own[0], columns: own.length, text, unknown }];
  });
  const shared = { pastColumns: board.past.length, columnWidth, names };

  return (
    <>
      <div
        ref={ref}
        role="region"
        aria-label="Shifts, step with the arrow keys"
        tabIndex={0}
        onKeyDown={ribbon.handleKeyDown}
        className="week-board relative overflow-x-auto overflow-y-clip"
      >
        <div className="relative w-max pb-2">
          <i aria-hidden="true" className="now-line" style={{ ['--past' as string]: board.past.length }} />
          <BoardRow
            ruled={false}
            gutter={
              <div className="flex h-full flex-wrap items-end gap-x-5 gap-y-1 text-side print:hidden">
                <Button look="quiet" onClick={ribbon.earlier} disabled={ribbon.place.atStart}>
                  Earlier
                </Button>
                <Button look="quiet" onClick={ribbon.later} disabled={ribbon.place.atEnd}>
                  Later
                </Button>
              </div>
            }
            strip={
              <div className="relative pt-1.5">
                <p className="sr-only">
                  Shifts from {columns.at(0)?.fullName} to {columns.at(-1)?.fullName}. {then ? 'Then' : 'Now'}{' '}
                  {formatTime(week.now, site.timeZone)}.{' '}
                  {outlook.result.calendar
                    .map((day) => `${day.name}, ${formatDay(day.from, site.timeZone, 'short')}`)
                    .join('; ')}
                </p>
                <div
                  aria-hidden="true"
                  className="absolute top-0 z-10 rounded-t-button rounded-br-button bg-act px-2 py-1 text-side leading-tight font-extrabold whitespace-nowrap text-act-ink"
                  style={{ left: board.past.length * columnWidth - 1.5 }}
                >
                  {then ? 'Then' : 'Now'}
                </div>
                <WeekRibbon
                  columnWidth={columnWidth}
                  events={events}
                  shifts={columns.map(({ from, name, sky, day }, index) => ({
                    from,
                    name,
                    sky,
                    // The flag of now stands over the column's own day.
                    day: index === board.past.length ? null : day,
                  }))}
                />
              </div>
            }
          />
          <PanelBoundary>
            <WeekDepartmentRow {...shared} board={board} />
          </PanelBoundary>
          {board.areas.map((row) => (
            <PanelBoundary key={row.area.id}>
              <WeekAreaRow
                {...shared}
                row={row}
                planningRisk={outlook.result.planningRisk}
                open={pressed[row.area.id] ?? row.area.id === worstAreaId}
                onToggle={(open) => setPressed((was) => ({ ...was, [row.area.id]: open }))}
              />
            </PanelBoundary>
          ))}
          <ArrivalRow {...{ board, outlook, columnWidth }} timeZone={site.timeZone} />
        </div>
      </div>
      <div className="page-pad pb-2">
        <PictureTools of={ref} title={`Week ahead, ${site.name}`} />
      </div>
    </>
  );
}

function sayHour({ forecast, actual }: FanHour): string {
  const range = (low: number, high: number) => `${formatNumber(low)} to ${formatNumber(high)}`;
  return [
    ...(forecast
      ? [`50\u00a0% range ${range(forecast.p25, forecast.p75)}, 95\u00a0% ${range(forecast.p2_5, forecast.p97_5)}`]
      : []),
    ...(actual === null ? [] : [`${formatNumber(actual)} came`]),
  ].join('; ');
}

function ArrivalRow({
  board,
  outlook,
  columnWidth,
  timeZone,
}: {
  board: Board;
  outlook: WeekOutlook;
  columnWidth: number;
  timeZone: string;
}) {
  const { days, weeks } = outlook.result.arrivals;
  const whole = days.spans.flatMap((span, index) => (index > 0 && span.to <= board.until ? [index] : []));
  const busiest = whole.reduce(
    (most, index) => (days.total.p50[index] > days.total.p50[most] ? index : most),
    whole[0],
  );
  return (
    <BoardRow
      gutter={
        <div className="grid gap-1.5">
          <h2 className="text-section">Arrivals</h2>
          <p className="text-label text-ink2 tight">
            Each day’s middle figure and its 95&nbsp;% range, then hour by hour. A longer shift has narrower hours.
          </p>
          <ul className="flex flex-wrap gap-x-3 text-label text-ink2" aria-label="Bands of the drawing">
            {(['50', '80', '95'] as const).map((share, index) => (
              <li key={share} className="flex items-center gap-1.5">
                <span className={`inline-block h-3.5 w-5 ${['bg-f1', 'bg-f2', 'bg-f3'][index]}`} />
                {share}&nbsp;%
              </li>
            ))}
            <li className="flex items-center gap-1.5">
              <span className="inline-block h-0 w-5 border-t-2 border-ink" /> what came
            </li>
          </ul>
        </div>
      }
      strip={
        <div className="pt-3">
          <p className="sr-only">
            {weeks.spans.length > 0
              ? `Arrivals in the next seven whole days: ${formatNumber(weeks.total.p50[0])}, 95 % range ${formatNumber(weeks.total.p2_5[0])} to ${formatNumber(weeks.total.p97_5[0])}. `
              : ''}
            {whole.length > 0
              ? `Most on ${days.spans[busiest].name}: ${formatNumber(days.total.p50[busiest])}, 95 % range ${formatNumber(days.total.p2_5[busiest])} to ${formatNumber(days.total.p97_5[busiest])}.`
              : ''}
          </p>
          <ChartReader
            label="Arrivals by hour"
            columnWidth={columnWidth}
            readings={board.fan.flatMap(({ hours }, column) =>
              hours.map((hour, index) => ({
                name: `${formatDay(hour.from, timeZone, 'short')}, ${formatTime(hour.from, timeZone)}`,
                text: sayHour(hour),
                x: column * columnWidth + (index * columnWidth) / hours.length,
                width: columnWidth / hours.length,
              })),
            )}
          >
            <ArrivalFan columns={board.fan} columnWidth={columnWidth} height={132} />
          </ChartReader>
        </div>
      }
    />
  );
}
