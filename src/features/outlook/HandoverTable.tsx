import { Fragment } from 'react';
import type { Outlook } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import { formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { formatHour, formatList, formatTime } from '../../lib/format.ts';
import type { Board, BoardArea } from './tonight-board.ts';

/** Hours of a shift past an area's limit as spans: "from 21:00 to 23:00 and at 02:00". Null if none is. */
export function pastInWords(
  row: Pick<BoardArea, 'chances' | 'area'>,
  places: readonly number[],
  timeOf: (place: number) => string,
): string | null {
  const spans: { first: number; last: number }[] = [];
  for (const place of places) {
    if (!(row.chances[place].chance > row.area.alertLimit)) continue;
    const span = spans.at(-1);
    if (span?.last === place - 1) span.last = place;
    else spans.push({ first: place, last: place });
  }
  if (spans.length === 0) return null;
  return formatList(
    spans.map(({ first, last }) =>
      first === last ? `at ${timeOf(first)}` : `from ${timeOf(first)} to ${timeOf(last)}`,
    ),
  );
}

const tones = {
  1: 'bg-r1 text-r1i font-semibold',
  2: 'bg-r2 text-r2i',
  3: 'bg-r3 text-r3i',
  4: 'bg-r4 text-r4i',
  5: 'bg-r5 text-r5i',
} as const;

/** Each area: what is there, and through the hours of the coming shift need at P90, staffed beds and the chance of a shortfall. */
export function HandoverTable({
  board,
  outlook,
  shift,
  shiftName,
  site,
}: {
  board: Board;
  outlook: Outlook;
  shift: ShiftTime;
  shiftName: string;
  site: Site;
}) {
  const ahead = board.hours.filter((hour) => !hour.past);
  // A page holds twelve columns; what lies after them is on the screen.
  const places = ahead.flatMap(({ at }, place) => (at >= shift.from && at < shift.to ? [place] : [])).slice(0, 12);
  const timeOf = (place: number) => formatTime(ahead[place].at, site.timeZone);
  if (places.length === 0) return <p className="mt-3 font-bold">This outlook holds no hour of the {shiftName}.</p>;
  return (
    <div className="relative overflow-x-auto" role="region" aria-label={`Areas through the ${shiftName}`} tabIndex={0}>
      <table className="mt-2 w-full border-collapse text-center text-label">
        <caption className="sr-only">Areas through the {shiftName}</caption>
        <thead>
          <tr className="border-b border-ink text-small">
            <th scope="col" className="py-1 text-left">
              Area
            </th>
            {['Present', 'Waiting', 'Boarding', 'Staffed'].map((name) => (
              <th key={name} scope="col" className="px-0.5 font-semibold tighter">
                {name}
              </th>
            ))}
            <th scope="col">
              <span className="sr-only">Figure</span>
            </th>
            {places.map((place) => (
              <th key={place} scope="col" className="min-w-8 px-0.5">
                <span aria-hidden="true">{formatHour(ahead[place].at, site.timeZone)}</span>
                <span className="sr-only">{timeOf(place)}</span>
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {board.areas.map((row) => (
            <AreaLines key={row.area.id} {...{ row, outlook, places, timeOf }} />
          ))}
        </tbody>
      </table>
    </div>
  );
}

function AreaLines({
  row,
  outlook,
  places,
  timeOf,
}: {
  row: BoardArea;
  outlook: Outlook;
  places: readonly number[];
  timeOf: (place: number) => string;
}) {
  const census = outlook.census.find((entry) => entry.areaId === row.area.id);
  const columns = row.columns.filter((column) => column.kind === 'forecast');
  const limit = `${String(Math.round(row.area.alertLimit * 100))}\u00a0%`;
  const past = row.counted ? pastInWords(row, places, timeOf) : null;
  const figure = (value: number | null | undefined) => (
    <td className="text-area">{row.counted ? (value ?? '–') : '–'}</td>
  );
  return (
    <Fragment>
      <tr className="border-t border-edge">
        <th scope="rowgroup" className="pt-1 text-left text-area">
          {row.area.name}
        </th>
        {figure(census?.present)}
        {figure(census?.waiting)}
        {figure(census?.boarding)}
        <td className="text-area">{row.staffed.length > 0 ? bedsAt(row.staffed, outlook.issuedAt) : '–'}</td>
        <th scope="row" className="pr-1 text-right text-small font-semibold whitespace-nowrap tighter">
          {row.counted ? 'Need, P90' : 'Expected, P90'}
        </th>
        {places.map((place) => (
          <td
            key={place}
            className={
              !row.counted
                ? 'italic text-ink2'
                : columns[place].p90 > columns[place].staffed
                  ? 'font-extrabold'
                  : undefined
            }
          >
            {columns[place].p90}
          </td>
        ))}
      </tr>
      <tr>
        <td rowSpan={2} colSpan={5} className="pb-1 text-left align-top text-small">
          {!row.counted ? (
            <b>Not counted: the figures are what the model expects on such a night.</b>
          ) : past === null ? (
            `Not past its ${limit} limit`
          ) : (
            <b>
              Past its {limit} limit {past}
            </b>
          )}
          {row.area.spaces <= 8 && row.counted ? <span className="text-ink2"> (chance within the hour)</span> : null}
        </td>
        <th scope="row" className="pr-1 text-right text-small font-semibold tighter">
          Staffed
        </th>
        {places.map((place) => (
          <td key={place} className="text-ink2">
            {columns[place].staffed}
          </td>
        ))}
      </tr>
      <tr>
        <th scope="row" className="pr-1 pb-1 text-right text-small font-semibold tighter">
          Chance, %
        </th>
        {places.map((place) => {
          const { chance } = row.chances[place];
          const over = row.counted && chance > row.area.alertLimit;
          return (
            <td key={place} className="px-px pb-1 align-top">
              <span
                className={`block font-bold ${row.counted ? tones[riskStep(chance)] : 'border border-dashed border-edge'} ${over ? 'border-b-[3px] border-ink' : ''}`}
              >
                {row.counted ? formatChance(chance).replace(' %', '') : '–'}
                <span className="sr-only">{row.counted ? `, ${riskWord(chance)}` : 'not counted'}</span>
              </span>
            </td>
          );
        })}
      </tr>
    </Fragment>
  );
}
