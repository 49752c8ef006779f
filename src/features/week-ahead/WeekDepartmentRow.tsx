import { useId } from 'react';
import { NeedStrip } from '../../../shared/charts/NeedStrip.tsx';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { BoardRow } from '../../components/BoardRow.tsx';
import { ChanceTable } from '../../components/ChanceTable.tsx';
import { ReadNeed } from '../../components/ReadNeed.tsx';
import { formatSigned } from '../../lib/format.ts';
import { stepsOf } from './week-board.ts';
import type { WeekBoard } from './week-board.ts';

/** The highest of some chances with its shift, as a line with mark, word and number. */
export function HighestLine({ chances, names }: { chances: readonly number[]; names: readonly string[] }) {
  if (chances.length === 0) return null;
  const most = Math.max(...chances);
  const at = chances.indexOf(most);
  return (
    <p className="flex gap-2 text-label text-ink2 tight">
      <RiskMark step={riskStep(most)} className="mt-0.5 h-4 w-5 shrink-0" />
      <span>
        {riskWord(most)} at most: <b className="text-ink">{formatChance(most).replace(' ', '\u00a0')}</b>, {names[at]}
      </span>
    </p>
  );
}

/** The whole department by shift: the chance that some area is short, and the pooled need beneath it. */
export function WeekDepartmentRow({
  board,
  pastColumns,
  columnWidth,
  names,
}: {
  board: WeekBoard;
  pastColumns: number;
  columnWidth: number;
  names: readonly string[];
}) {
  const id = useId();
  const { columns, shifts } = board.department;
  const some = shifts.map(({ someAreaShort }) => someAreaShort);
  const counted = board.areas.every((area) => area.counted);
  return (
    <BoardRow
      ruled={false}
      gutter={
        <div className="grid gap-1.5">
          <h2 className="text-section">Whole department</h2>
          <p className="text-label text-ink2 tight">
            Sand: beds needed at each shift’s peak. Line: beds planned, at their fewest.
          </p>
          <HighestLine chances={some} names={names} />
        </div>
      }
      strip={
        <div className="pt-4">
          <p className="sr-only">
            {some.length > 0
              ? `Chance that some area is short some time in the shift: highest ${formatChance(Math.max(...some))}, ${names[some.indexOf(Math.max(...some))]}.`
              : ''}
            {counted ? '' : ' The first day starts from what the model expects.'}
          </p>
          <ReadNeed label="Whole department, need by shift" columns={columns} names={names} columnWidth={columnWidth}>
            <NeedStrip
              id={id}
              columns={columns}
              staffed={stepsOf(columns)}
              unit=""
              columnWidth={columnWidth}
              height={96}
              tall
              counted
            />
          </ReadNeed>
          <ChanceTable
            caption="Whole department, shift by shift"
            hourNames={names}
            pastColumns={pastColumns}
            hiddenColumns={0}
            columnWidth={columnWidth}
            rows={[
              {
                kind: 'chance',
                label: 'Some area short',
                short: 'Some short',
                chances: some.map((chance) => ({ chance })),
                limit: null,
                counted: true,
                words: true,
              },
              {
                kind: 'figures',
                label: 'If pooled',
                short: 'If pooled',
                figures: shifts.map(({ pooledShort }, index) => ({
                  text: formatChance(pooledShort).replace(' ', ''),
                  spoken: `${formatChance(pooledShort)} if every bed could take any patient, ${names[index]}`,
                })),
              },
              {
                kind: 'figures',
                label: 'Headroom',
                short: 'Headroom',
                figures: shifts.map(({ staffedLeast, peak }, index) => ({
                  text: formatSigned(staffedLeast - peak.p90),
                  spoken: `headroom ${formatSigned(staffedLeast - peak.p90)} if every bed could take any patient, ${names[index]}`,
                  strong: staffedLeast < peak.p90,
                })),
              },
            ]}
          />
        </div>
      }
    />
  );
}
