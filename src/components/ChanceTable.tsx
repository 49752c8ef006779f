import type { ReactNode } from 'react';
import { RiskMark } from '../../shared/charts/RiskMark.tsx';
import { formatChance, riskStep, riskWord, riskWords } from '../../shared/domain/risk-word.ts';
import { ChanceFigure } from './ChanceFigure.tsx';
import { classNames } from '../lib/class-names.ts';
import { riskRuns } from '../lib/risk-runs.ts';

export interface ChanceRow {
  kind: 'chance';
  label: string;
  /** The same where only two narrow columns are free for it. */
  short: string;
  chances: readonly { chance: number }[];
  /** The chance past which a cell carries the bar; null for rows without a limit. */
  limit: number | null;
  /** False: an outline without a word. */
  counted: boolean;
  /** Marks and words of the runs stand above the cells. */
  words?: boolean;
}

export interface FigureRow {
  kind: 'figures';
  label: string;
  short: string;
  figures: readonly { text: string; spoken: string; strong?: boolean }[];
  /** Stands in heavier type, as the answer rather than the ground. */
  strong?: boolean;
}

export type StripRow = ChanceRow | FigureRow;

/**
 * The figures under a drawing, one column an hour: a real table whose cells speak in full
 * ("64 %, Likely, 21:00"), drawn as the strip itself. The rows' names stand in the columns of the
 * hours that have passed, where there is nothing to foresee.
 */
export function ChanceTable({
  caption,
  hourNames,
  pastColumns,
  hiddenColumns,
  columnWidth,
  rows,
}: {
  caption: string;
  /** Full names of the hours ahead: "21:00" or "07:00 Wednesday". */
  hourNames: readonly string[];
  pastColumns: number;
  /** Of those, how many lie before the first view. */
  hiddenColumns: number;
  columnWidth: number;
  rows: readonly StripRow[];
}) {
  const width = (pastColumns + hourNames.length) * columnWidth;
  return (
    <table
      className="table-fixed border-separate border-spacing-0"
      style={{ width, ['--hidden' as string]: `${String(hiddenColumns * columnWidth)}px` }}
    >
      <caption className="sr-only">{caption}</caption>
      <colgroup>
        <col style={{ width: pastColumns * columnWidth }} />
        {hourNames.map((name) => (
          <col key={name} style={{ width: columnWidth }} />
        ))}
      </colgroup>
      <thead className="sr-only">
        <tr>
          <th scope="col">Figure</th>
          {hourNames.map((name) => (
            <th key={name} scope="col">
              {name}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {rows.map((row) =>
          row.kind === 'chance' ? (
            <ChanceCells key={row.label} row={row} hourNames={hourNames} columnWidth={columnWidth} />
          ) : (
            <tr key={row.label}>
              <RowName short={row.short}>{row.label}</RowName>
              {row.figures.map((figure, index) => (
                <td
                  key={hourNames[index]}
                  className={classNames(
                    'h-5.5 p-0 text-center text-small leading-none tight',
                    row.strong || figure.strong ? 'font-extrabold text-ink' : 'font-semibold text-ink2',
                  )}
                >
                  <span aria-hidden="true">{figure.text}</span>
                  <span className="sr-only">{figure.spoken}</span>
                </td>
              ))}
            </tr>
          ),
        )}
      </tbody>
    </table>
  );
}

function RowName({ short, children }: { short: string; children: ReactNode }) {
  return (
    <th
      scope="row"
      // Stays at the edge of the gutter when the hours slide, so that a figure never stands without its name.
      className="sticky left-[calc(var(--covered)-var(--hidden))] z-[11] bg-water print:static p-0 pr-2 text-right align-middle text-small font-semibold whitespace-nowrap text-ink2 tighter"
    >
      <span className="max-lg:sr-only">{children}</span>
      <span aria-hidden="true" className="lg:hidden">
        {short}
      </span>
    </th>
  );
}

function ChanceCells({
  row,
  hourNames,
  columnWidth,
}: {
  row: ChanceRow;
  hourNames: readonly string[];
  columnWidth: number;
}) {
  return (
    <>
      {row.words && row.counted ? (
        <RunWords chances={row.chances.map((cell) => cell.chance)} columnWidth={columnWidth} />
      ) : null}
      <tr className={row.limit === null ? undefined : 'h-7.5'}>
        <RowName short={row.short}>{row.label}</RowName>
        {row.chances.map(({ chance }, index) => {
          const past = row.counted && row.limit !== null && chance > row.limit;
          const step = riskStep(chance);
          return (
            <td key={hourNames[index]} className="p-0 pr-px align-top">
              <div
                className={classNames(
                  'flex h-6 items-center justify-center text-cell font-stretch-[92%]',
                  row.counted ? cellLooks[step] : 'border border-dashed border-edge font-semibold text-ink2',
                  row.counted && step === 1 && 'font-semibold',
                )}
              >
                <span aria-hidden="true">
                  <ChanceFigure chance={chance} />
                </span>
                <span className="sr-only">
                  {formatChance(chance)}, {row.counted ? riskWord(chance) : 'not counted'}, {hourNames[index]}
                  {past ? ', past the limit' : ''}
                </span>
              </div>
              {past ? <div className="mt-px h-[3px] bg-ink" /> : null}
            </td>
          );
        })}
      </tr>
    </>
  );
}

const cellLooks = {
  1: 'bg-r1 text-r1i',
  2: 'bg-r2 text-r2i',
  3: 'bg-r3 text-r3i',
  4: 'bg-r4 text-r4i',
  5: 'bg-r5 text-r5i',
} as const;

/** Each run's mark and, where it has room, its word; for the eye only, since every cell says its own word. */
function RunWords({ chances, columnWidth }: { chances: readonly number[]; columnWidth: number }) {
  return (
    <tr aria-hidden="true">
      <td className="p-0" />
      {riskRuns(chances).map((run) => {
        const word = riskWords[run.step - 1];
        const room = run.length * columnWidth;
        return (
          <td key={run.start} colSpan={run.length} className="h-5 overflow-visible p-0 align-bottom">
            <span
              className={classNames(
                'flex items-end gap-1 pl-0.5 text-small leading-none whitespace-nowrap tight',
                run.step >= 3 ? 'font-extrabold text-ink' : 'font-semibold text-ink2',
              )}
            >
              <RiskMark step={run.step} className="h-4 w-5 shrink-0" />
              {word.length * 7 + 26 <= room ? word : null}
            </span>
          </td>
        );
      })}
    </tr>
  );
}
