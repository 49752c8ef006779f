import { useRef } from 'react';
import type { ReactNode } from 'react';
import { classNames } from '../../lib/class-names.ts';
import { figureText, isWithin } from './figure-grid.ts';
import type { CellEdit, GridCell, Place } from './figure-grid.ts';
import { useFigureGrid } from './use-figure-grid.ts';

export interface GridRow {
  key: string;
  header: ReactNode;
  /** Stands over the row, where a group of rows begins. */
  group?: ReactNode;
}

export interface GridColumn {
  key: string;
  header: ReactNode;
}

/**
 * Figures in rows and columns, worked as a spreadsheet is: arrows, typing, Enter and Escape, ranges with Shift, copy and
 * paste. What holds of the chosen cell stands in words under it.
 */
export function FigureGrid({
  caption,
  corner,
  rows,
  columns,
  cellAt,
  narrow = false,
  onEdit,
  onUndo,
  onRedo,
}: {
  caption: string;
  corner: string;
  rows: readonly GridRow[];
  columns: readonly GridColumn[];
  cellAt: (row: number, column: number) => GridCell;
  /** Many columns without notes. */
  narrow?: boolean;
  onEdit?: (edits: CellEdit[]) => void;
  onUndo?: () => void;
  onRedo?: () => void;
}) {
  const size = { rows: rows.length, columns: columns.length };
  const at = ({ row, column }: Place) => cellAt(row, column);
  const tableRef = useRef<HTMLTableElement>(null);
  const grid = useFigureGrid({ tableRef, size, cellAt: at, onEdit, onUndo, onRedo });
  const { selection, typed } = grid;
  const active = {
    row: Math.min(selection.active.row, rows.length - 1),
    column: Math.min(selection.active.column, columns.length - 1),
  };
  return (
    <div>
      <div className="overflow-x-auto" role="group" aria-label={caption}>
        <table
          ref={tableRef}
          role="grid"
          aria-multiselectable
          aria-readonly={onEdit ? undefined : true}
          className={classNames('border-collapse text-right', narrow ? '' : 'w-full max-w-[76rem]')}
          onKeyDown={grid.handleKey}
          onCopy={grid.handleCopy}
          onPaste={grid.handlePaste}
        >
          <caption className="sr-only">{caption}</caption>
          <thead>
            <tr className="border-b-2 border-edge align-bottom">
              <th
                scope="col"
                className="sticky left-0 z-10 min-w-28 bg-water py-1 pr-2 text-left text-quiet font-bold text-ink2 lg:min-w-40"
              >
                {corner}
              </th>
              {columns.map(({ key, header }) => (
                <th key={key} scope="col" className="px-2 py-1 text-quiet font-bold text-ink2">
                  {header}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {rows.map(({ key, header, group }, row) => [
              group ? (
                <tr key={`${key} group`}>
                  <th colSpan={columns.length + 1} scope="rowgroup" className="pt-4 pb-1 text-left font-normal">
                    {group}
                  </th>
                </tr>
              ) : null,
              <tr key={key}>
                <th
                  scope="row"
                  className="sticky left-0 z-10 bg-water py-1 pr-2 text-left text-side font-bold text-ink"
                >
                  {header}
                </th>
                {columns.map((column, index) => {
                  const place = { row, column: index };
                  const isActive = active.row === row && active.column === index;
                  return (
                    <FigureCell
                      key={column.key}
                      cell={cellAt(row, index)}
                      place={place}
                      narrow={narrow}
                      active={isActive}
                      within={isWithin(selection, place)}
                      typed={isActive ? typed : null}
                      onType={grid.setTyped}
                      onLeave={grid.handleLeave}
                      onPress={grid.handlePress}
                      onDraw={grid.extendTo}
                    />
                  );
                })}
              </tr>,
            ])}
          </tbody>
        </table>
      </div>
      <p className="mt-2 min-h-11 text-quiet text-ink2" aria-live="polite">
        {grid.said ? <b className="text-ink">{grid.said} </b> : null}
        {rows.length > 0 ? cellAt(active.row, active.column).told : null}
      </p>
    </div>
  );
}

function FigureCell({
  cell,
  place,
  narrow,
  active,
  within,
  typed,
  onType,
  onLeave,
  onPress,
  onDraw,
}: {
  cell: GridCell;
  place: Place;
  narrow: boolean;
  active: boolean;
  within: boolean;
  typed: string | null;
  onType: (text: string) => void;
  onLeave: () => void;
  onPress: (place: Place, shift: boolean) => void;
  onDraw: (place: Place) => void;
}) {
  const { note, short, fault, changed } = cell;
  return (
    <td
      role="gridcell"
      data-cell={`${String(place.row)}.${String(place.column)}`}
      tabIndex={active ? 0 : -1}
      aria-selected={within}
      aria-invalid={fault ? true : undefined}
      className={classNames(
        'cursor-cell select-none border-2 border-water px-1.5 align-top',
        narrow ? 'h-11 min-w-12' : 'h-14 min-w-20 lg:min-w-24',
        within ? 'bg-act-soft' : 'bg-paper',
        fault
          ? 'border-b-[3px] border-b-warn'
          : changed
            ? 'border-b-[3px] border-b-act'
            : 'border-b-[3px] border-b-edge',
      )}
      onMouseDown={(event) => {
        if (event.button !== 0 || typed !== null) return;
        // The grid itself decides where the focus goes.
        event.preventDefault();
        onPress(place, event.shiftKey);
      }}
      onMouseEnter={(event) => {
        if (event.buttons === 1) onDraw(place);
      }}
    >
      {typed === null ? (
        <span className="block pt-1 text-census text-ink">
          {figureText(cell) || <span className="text-ink3">–</span>}
          {cell.hole && cell.low !== null ? <span className="text-warn"> +?</span> : null}
        </span>
      ) : (
        <input
          autoFocus
          inputMode="numeric"
          aria-label="Staffed beds"
          size={1}
          className="block h-9 w-full min-w-0 bg-paper px-1 text-right text-census text-ink"
          value={typed}
          onChange={(event) => onType(event.target.value)}
          onBlur={onLeave}
        />
      )}
      {fault ? (
        <span className="block text-small font-extrabold text-warn">check</span>
      ) : note && typed === null ? (
        <span
          className={classNames(
            'tight block whitespace-nowrap text-small',
            short ? 'font-extrabold text-s2' : 'text-ink2',
          )}
        >
          {note}
        </span>
      ) : null}
    </td>
  );
}
