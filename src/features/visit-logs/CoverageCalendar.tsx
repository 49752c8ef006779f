import { useState } from 'react';
import { Group } from '@visx/group';
import { Bar } from '@visx/shape';
import type { VisitLogSummary } from '../../../shared/api/visit-logs.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatList, formatNumber } from '../../lib/format.ts';
import { useWidth } from '../../lib/use-width.ts';
import { coverDays, type CoverDay, type CoverMonth } from './cover-days.ts';

const monthNames = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
const nameOf = ({ year, month }: CoverMonth) => `${monthNames[month - 1]} ${String(year)}`;

const labelWidth = 66;
const axisHeight = 20;
const rowHeight = 22;
const barHeight = 17;
const monthsShown = 15;

/** Which days are covered by which log, a row a month, the newest first; the table behind says the same. */
export function CoverageCalendar({
  logs,
  numberOf,
  timeZone,
}: {
  /** At least one of them counts. */
  logs: readonly VisitLogSummary[];
  /** The number by which the list calls a log. */
  numberOf: (logId: string) => number;
  timeZone: string;
}) {
  const [showsAll, setShowsAll] = useState(false);
  const [ref, width] = useWidth<HTMLDivElement>();
  const months = coverDays(logs, timeZone);
  const shown = showsAll ? months : months.slice(0, monthsShown);
  const missing = months.reduce((sum, { days }) => sum + count(days, 'missing'), 0);
  const part = months.reduce((sum, { days }) => sum + count(days, 'part'), 0);
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Coverage calendar">
      <h2 className="text-h2">Days covered</h2>
      <p className="max-w-[58rem] text-ink2">
        {missing === 0 ? 'No day is missing' : `${formatCount(missing, 'day is', 'days are')} missing, outlined`}
        {part === 0 ? '' : `; ${formatCount(part, 'day is', 'days are')} covered in part, half as high`}. The numbers
        are those of the logs in the list.
      </p>
      <div
        ref={ref}
        className="max-w-[58rem] overflow-hidden"
        style={{ minHeight: axisHeight + shown.length * rowHeight }}
      >
        {width > 0 ? <Drawing months={shown} width={width} numberOf={numberOf} /> : null}
      </div>
      {months.length > monthsShown ? (
        <Button
          look="quiet"
          className="justify-self-start"
          onClick={() => {
            setShowsAll(!showsAll);
          }}
        >
          {showsAll
            ? `Show the newest ${formatNumber(monthsShown)} months`
            : `Show all ${formatNumber(months.length)} months`}
        </Button>
      ) : null}
      <details>
        <summary className="link inline-block min-h-6 cursor-pointer font-bold text-ink">The same as a table</summary>
        <DataTable
          caption="Days covered, by month"
          captionHidden
          rows={months}
          rowKey={nameOf}
          columns={[
            { key: 'month', header: 'Month', rowHeader: true, cell: nameOf },
            {
              key: 'whole',
              header: 'Days covered',
              figure: true,
              cell: ({ days }) => formatNumber(count(days, 'whole')),
            },
            { key: 'part', header: 'In part', figure: true, cell: ({ days }) => formatNumber(count(days, 'part')) },
            { key: 'missing', header: 'Missing', cell: ({ days }) => missingInWords(days) },
            { key: 'logs', header: 'By log', cell: ({ days }) => logsOf(days, numberOf) },
          ]}
        />
      </details>
    </section>
  );
}

const count = (days: readonly CoverDay[], cover: CoverDay['cover']) =>
  days.filter((each) => each.cover === cover).length;

function logsOf(days: readonly CoverDay[], numberOf: (logId: string) => number): string {
  const numbers = [...new Set(days.flatMap(({ logId }) => (logId === null ? [] : [numberOf(logId)])))];
  return numbers.length === 0 ? '–' : formatList(numbers.map((number) => formatNumber(number)));
}

/** "3; 8 to 12" */
function missingInWords(days: readonly CoverDay[]): string {
  const runs: { from: number; to: number }[] = [];
  for (const { day, cover } of days) {
    if (cover !== 'missing') continue;
    const last = runs.at(-1);
    if (last?.to === day - 1) last.to = day;
    else runs.push({ from: day, to: day });
  }
  const words = runs.map(({ from, to }) => (from === to ? String(from) : `${String(from)} to ${String(to)}`));
  return words.length === 0 ? '–' : words.join('; ');
}

function Drawing({
  months,
  width,
  numberOf,
}: {
  months: readonly CoverMonth[];
  width: number;
  numberOf: (logId: string) => number;
}) {
  const cell = (width - labelWidth) / 31;
  const height = axisHeight + months.length * rowHeight;
  return (
    <svg width={width} height={height} viewBox={`0 0 ${String(width)} ${String(height)}`} aria-hidden="true">
      {[1, 5, 10, 15, 20, 25, 31].map((day) => (
        <text
          key={day}
          x={labelWidth + (day - 0.5) * cell}
          y={13}
          textAnchor="middle"
          className="tight"
          fontSize={13}
          fill="var(--ink3)"
        >
          {day}
        </text>
      ))}
      {months.map((month, row) => (
        <Group key={nameOf(month)} top={axisHeight + row * rowHeight}>
          <text x={0} y={13.5} className="tight" fontSize={13.5} fontWeight={650} fill="var(--ink2)">
            {nameOf(month)}
          </text>
          {month.days.map((day) => (
            <DayCell
              key={day.day}
              day={day}
              x={labelWidth + (day.day - 1) * cell}
              width={cell - 1}
              numberOf={numberOf}
            />
          ))}
          {runStarts(month.days).map(({ day, logId, length }) => {
            const number = numberOf(logId);
            return length * cell < 9 + 8 * String(number).length ? null : (
              <text
                key={day}
                x={labelWidth + (day - 1) * cell + (cell < 16 ? 0.5 : 4)}
                y={13}
                fontSize={13}
                fontWeight={800}
                className="tight"
                fill={`var(--${toneOf(number)}i)`}
              >
                {number}
              </text>
            );
          })}
        </Group>
      ))}
    </svg>
  );
}

/** Neighbouring logs take turns, so that where one ends and the next begins is seen without its number. */
const toneOf = (number: number) => (number % 2 === 0 ? 'q3' : 'q4');

function DayCell({
  day,
  x,
  width,
  numberOf,
}: {
  day: CoverDay;
  x: number;
  width: number;
  numberOf: (logId: string) => number;
}) {
  const { cover, logId } = day;
  if (cover === 'outside') return null;
  const outline = (
    <rect
      x={x + 0.75}
      y={0.75}
      width={width - 1.5}
      height={barHeight - 1.5}
      fill="none"
      stroke="var(--ink)"
      strokeWidth={1.5}
    />
  );
  if (cover === 'missing' || logId === null) return outline;
  const fill = `var(--${toneOf(numberOf(logId))})`;
  if (cover === 'whole') return <Bar x={x} y={0} width={width} height={barHeight} fill={fill} />;
  return <Bar x={x} y={barHeight / 2} width={width} height={barHeight / 2} fill={fill} />;
}

/** Where a log's run of whole days begins in a month. */
function runStarts(days: readonly CoverDay[]): { day: number; logId: string; length: number }[] {
  const runs: { day: number; logId: string; length: number }[] = [];
  for (const { day, cover, logId } of days) {
    if (logId === null || cover !== 'whole') continue;
    const last = runs.at(-1);
    if (last?.logId === logId && last.day + last.length === day) last.length += 1;
    else runs.push({ day, logId, length: 1 });
  }
  return runs;
}
