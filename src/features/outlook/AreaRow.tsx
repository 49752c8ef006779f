import { useId } from 'react';
import { NeedStrip } from '../../../shared/charts/NeedStrip.tsx';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { formatSigned } from '../../lib/format.ts';
import { AreaGutter } from './AreaGutter.tsx';
import type { Rights } from './AreaGutter.tsx';
import { BoardRow } from '../../components/BoardRow.tsx';
import { ChanceTable } from '../../components/ChanceTable.tsx';
import { ReadNeed } from '../../components/ReadNeed.tsx';
import type { StripRow } from '../../components/ChanceTable.tsx';
import { LimitPanel } from './LimitPanel.tsx';
import { pastHours } from './tonight-board.ts';
import type { BoardArea } from './tonight-board.ts';

/** Rows of figures under an area's drawing; an open row also answers how many beds to add. */
function rowsOf(row: BoardArea, open: boolean, hourNames: readonly string[]): StripRow[] {
  const rows: StripRow[] = [
    {
      kind: 'chance',
      label: row.area.spaces <= 8 ? 'Chance, in the hour' : 'Chance of shortfall',
      short: row.area.spaces <= 8 ? 'In the hour' : 'Chance',
      chances: row.chances,
      limit: row.area.alertLimit,
      counted: row.counted,
      words: open,
    },
  ];
  if (!row.counted) return rows;
  if (open && row.bedsToAdd.some((beds) => beds > 0)) {
    rows.push({
      kind: 'figures',
      label: row.area.spaceKind === 'chair' ? 'Chairs to add' : 'Beds to add',
      short: 'To add',
      strong: true,
      figures: row.bedsToAdd.map((beds, index) => {
        const missing = row.bedsThatDoNotExist[index];
        return {
          text: beds > 0 ? `+${String(beds)}` : '',
          spoken: `${String(beds)} to add at ${hourNames[index]}${missing > 0 ? `, of which ${String(missing)} do not exist` : ''}`,
        };
      }),
    });
  }
  rows.push({
    kind: 'figures',
    label: 'Headroom at P90',
    short: 'Headroom',
    figures: row.headroom.map((beds, index) => ({
      text: formatSigned(beds),
      spoken: `headroom ${formatSigned(beds)} at ${hourNames[index]}`,
      strong: beds < 0,
    })),
  });
  return rows;
}

/** What the drawing shows, in one sentence. */
export function summariseArea(row: BoardArea, hourNames: readonly string[]): string {
  const { area } = row;
  if (!row.counted) return `${area.name} is not counted; the outline is what the model expects on such a night.`;
  const peak = Math.max(...row.chances.map((cell) => cell.chance));
  const at = row.chances.findIndex((cell) => cell.chance === peak);
  const past =
    row.firstPast === null ? 'No hour is past its limit' : `Past its limit first at ${hourNames[row.firstPast]}`;
  return `${area.name}: highest chance of a shortfall ${formatChance(peak)}, ${riskWord(peak)}, at ${hourNames[at]}. ${past}.`;
}

/** One care area: its figures in the gutter, its drawing over the hours, its chances hour by hour. */
export function AreaRow({
  row,
  index,
  open,
  onToggle,
  siteId,
  outlookId,
  note,
  onNote,
  timeZone,
  now,
  rights,
  columnWidth,
  hiddenColumns,
  hourNames,
}: {
  row: BoardArea;
  index: number;
  open: boolean;
  onToggle: () => void;
  siteId: string;
  outlookId: string;
  /** What is being typed about this area's risk. */
  note: string;
  onNote: (note: string) => void;
  timeZone: string;
  now: number;
  rights: Rights;
  columnWidth: number;
  hiddenColumns: number;
  hourNames: readonly string[];
}) {
  const id = useId();
  return (
    <BoardRow
      gutter={
        <AreaGutter
          {...{ area: row.area, index, row, siteId, timeZone, now, rights, open }}
          toggle={{ open, onToggle }}
        />
      }
      strip={
        <div className={open ? 'pt-5' : 'pt-2'}>
          <p className="sr-only">{summariseArea(row, hourNames)}</p>
          <ReadNeed
            label={`${row.area.name}, need by hour`}
            columns={row.columns}
            names={hourNames}
            columnWidth={columnWidth}
            timeZone={timeZone}
            unit={row.area.spaceKind === 'chair' ? 'chairs' : 'staffed'}
          >
            <NeedStrip
              id={id}
              columns={row.columns}
              staffed={row.staffed}
              unit={row.area.spaceKind === 'chair' ? 'chairs' : 'staffed'}
              columnWidth={columnWidth}
              height={open ? 104 : 52}
              tall={open}
              counted={row.counted}
            />
          </ReadNeed>
          <ChanceTable
            caption={`${row.area.name}, hour by hour`}
            hourNames={hourNames}
            pastColumns={pastHours}
            hiddenColumns={hiddenColumns}
            columnWidth={columnWidth}
            rows={rowsOf(row, open, hourNames)}
          />
          {open && row.firstPast !== null ? (
            <LimitPanel
              {...{ row, siteId, outlookId, note, onNote, columnWidth, hiddenColumns, hourNames, timeZone }}
              mayAcknowledge={rights.acknowledge}
            />
          ) : null}
        </div>
      }
    />
  );
}
