import { useId } from 'react';
import { NeedStrip } from '../../../shared/charts/NeedStrip.tsx';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { riskInWords } from '../../../shared/forecasting/week-sentence.ts';
import { BoardRow } from '../../components/BoardRow.tsx';
import { ChanceTable } from '../../components/ChanceTable.tsx';
import { ReadNeed } from '../../components/ReadNeed.tsx';
import type { StripRow } from '../../components/ChanceTable.tsx';
import { formatSigned } from '../../lib/format.ts';
import { stepsOf } from './week-board.ts';
import type { WeekArea } from './week-board.ts';
import { HighestLine } from './WeekDepartmentRow.tsx';

function rowsOf(row: WeekArea, open: boolean, risk: string, names: readonly string[]): StripRow[] {
  const rows: StripRow[] = [
    {
      kind: 'chance',
      label: 'Some time short',
      short: 'Short',
      chances: row.shifts.map(({ someTime }) => ({ chance: someTime })),
      limit: row.area.alertLimit,
      counted: true,
      words: open,
    },
    {
      kind: 'figures',
      label: `Gap at ${risk}`,
      short: 'Gap',
      strong: true,
      figures: row.shifts.map(({ bedsToAdd, bedsThatDoNotExist }, index) => ({
        text: bedsToAdd > 0 ? `+${String(bedsToAdd)}` : '·',
        spoken:
          `${String(bedsToAdd)} to add, ${names[index]}` +
          (bedsThatDoNotExist > 0 ? `, of which ${String(bedsThatDoNotExist)} do not exist` : ''),
      })),
    },
  ];
  if (open) {
    rows.push({
      kind: 'figures',
      label: 'Headroom, P90',
      short: 'Headroom',
      figures: row.shifts.map(({ headroom }, index) => ({
        text: formatSigned(headroom),
        spoken: `headroom ${formatSigned(headroom)}, ${names[index]}`,
        strong: headroom < 0,
      })),
    });
  }
  return rows;
}

/** One care area by shift: need at its peak against the beds planned, chance of any shortfall, and the gap. */
export function WeekAreaRow({
  row,
  planningRisk,
  open,
  onToggle,
  pastColumns,
  columnWidth,
  names,
}: {
  row: WeekArea;
  planningRisk: number;
  open: boolean;
  onToggle: (open: boolean) => void;
  pastColumns: number;
  columnWidth: number;
  names: readonly string[];
}) {
  const id = useId();
  const { area } = row;
  const chances = row.shifts.map(({ someTime }) => someTime);
  const most = chances.length > 0 ? Math.max(...chances) : 0;
  const gaps = row.shifts.filter(({ bedsToAdd }) => bedsToAdd > 0).length;
  return (
    <BoardRow
      gutter={
        <div className="grid gap-1.5">
          <h3 className="text-area font-stretch-[92%]">
            <button
              type="button"
              aria-expanded={open}
              onClick={() => onToggle(!open)}
              className="inline-flex min-h-6 cursor-pointer items-center gap-1.5 [font-weight:inherit] hover:underline"
            >
              {area.name}
              <svg
                viewBox="0 0 10 10"
                aria-hidden="true"
                className="size-2.5 print:hidden"
                fill="none"
                stroke="var(--edge)"
                strokeWidth="2"
              >
                <path d={open ? 'M1 7L5 3L9 7' : 'M1 3L5 7L9 3'} />
              </svg>
            </button>
          </h3>
          <HighestLine chances={chances} names={names} />
        </div>
      }
      strip={
        <div className={open ? 'pt-4' : 'pt-2'}>
          <p className="sr-only">
            {`${area.name}: highest chance of any shortfall in a shift ${formatChance(most)}, ${riskWord(most)}, ` +
              `${names[chances.indexOf(most)] ?? ''}. ${String(gaps)} of ${String(chances.length)} shifts need more than is planned at a ${riskInWords(planningRisk)} risk.`}
          </p>
          <ReadNeed label={`${area.name}, need by shift`} columns={row.columns} names={names} columnWidth={columnWidth}>
            <NeedStrip
              id={id}
              columns={row.columns}
              staffed={stepsOf(row.columns)}
              unit=""
              columnWidth={columnWidth}
              height={open ? 92 : 48}
              tall={open}
              counted
            />
          </ReadNeed>
          <ChanceTable
            caption={`${area.name}, shift by shift`}
            hourNames={names}
            pastColumns={pastColumns}
            hiddenColumns={0}
            columnWidth={columnWidth}
            rows={rowsOf(row, open, riskInWords(planningRisk), names)}
          />
        </div>
      }
    />
  );
}
