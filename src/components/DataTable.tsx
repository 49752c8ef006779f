import { useVirtualizer } from '@tanstack/react-virtual';
import { useRef } from 'react';
import type { ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';
import { TableTools, type TableFile } from './TableTools.tsx';
import { columnName, useTableView, type Column } from './use-table-view.ts';

export type { Column } from './use-table-view.ts';

/** Beyond this many rows only those in view stand in the page. */
const virtualFrom = 150;
/** From here on a reader may search. */
const searchFrom = 12;
const rowHeight = 44;

/**
 * A table with a caption, scrollable sideways by touch and keyboard where it is wider than the page. Columns with a `value`
 * can be sorted; with a `file` it can be searched, copied and saved, and columns left out. Long ones scroll under their head.
 */
export function DataTable<Row>({
  caption,
  captionHidden = false,
  columns: given,
  rows: givenRows,
  rowKey,
  empty,
  file,
}: {
  caption: string;
  captionHidden?: boolean;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  /** What stands in place of rows: what it means and what to do. */
  empty?: ReactNode;
  file?: TableFile;
}) {
  const view = useTableView(givenRows, given);
  const { columns, rows } = view;
  const ref = useRef<HTMLDivElement>(null);
  const long = rows.length > virtualFrom;
  // eslint-disable-next-line react-hooks/incompatible-library -- the rule guards the React compiler, which this build does not use
  const virtual = useVirtualizer({
    count: rows.length,
    enabled: long,
    getScrollElement: () => ref.current,
    estimateSize: () => rowHeight,
    overscan: 12,
  });
  const items = virtual.getVirtualItems();
  const shown = long
    ? items.map(({ index }) => ({ index, row: rows[index] }))
    : rows.map((row, index) => ({ index, row }));
  const before = long ? (items.at(0)?.start ?? 0) : 0;
  const after = long ? virtual.getTotalSize() - (items.at(-1)?.end ?? 0) : 0;
  const none = view.sought.trim() !== '' && rows.length === 0 ? 'No row holds that.' : empty;

  return (
    <div>
      {file ? (
        <TableTools
          {...{ caption, rows, file }}
          columns={given}
          hidden={view.hidden}
          sought={view.sought}
          onSeek={view.setSought}
          onToggle={view.toggleColumn}
          searchable={givenRows.length >= searchFrom}
        />
      ) : null}
      <div
        ref={ref}
        className={classNames('relative overflow-x-auto', long && 'max-h-[70vh] overflow-y-auto')}
        role="region"
        aria-label={caption}
        tabIndex={0}
      >
        <table className="w-full border-collapse text-left" {...(long ? { 'aria-rowcount': rows.length + 1 } : {})}>
          <caption className={captionHidden ? 'sr-only' : 'pb-2 text-left font-bold text-ink'}>{caption}</caption>
          <thead className={long ? 'sticky top-0 z-10 bg-water' : undefined}>
            <tr className="border-b-2 border-edge">
              {columns.map((column) => (
                <HeaderCell key={column.key} column={column} sorting={view.sorting} onSort={view.sortBy} />
              ))}
            </tr>
          </thead>
          <tbody>
            {before > 0 ? <Spacer height={before} width={columns.length} /> : null}
            {shown.map(({ index, row }) => (
              <tr key={rowKey(row)} className="border-b border-hair" {...(long ? { 'aria-rowindex': index + 2 } : {})}>
                {columns.map((column) => {
                  const look = classNames(
                    'px-2 py-2.5 align-top first:pl-0',
                    // On a phone the table scrolls rather than squeeze words into letters.
                    column.figure ? 'text-right' : 'min-w-28',
                  );
                  return column.rowHeader ? (
                    <th key={column.key} scope="row" className={classNames(look, 'font-bold text-ink')}>
                      {column.cell(row)}
                    </th>
                  ) : (
                    <td key={column.key} className={look}>
                      {column.cell(row)}
                    </td>
                  );
                })}
              </tr>
            ))}
            {after > 0 ? <Spacer height={after} width={columns.length} /> : null}
            {rows.length === 0 && none ? (
              <tr>
                <td colSpan={columns.length} className="py-4 text-ink2">
                  {none}
                </td>
              </tr>
            ) : null}
          </tbody>
        </table>
      </div>
    </div>
  );
}

function HeaderCell<Row>({
  column,
  sorting,
  onSort,
}: {
  column: Column<Row>;
  sorting: { key: string; descending: boolean } | null;
  onSort: (key: string) => void;
}) {
  const sorted = sorting?.key === column.key ? sorting : null;
  const look = classNames(
    'px-2 py-2 align-bottom text-quiet font-bold text-ink2 first:pl-0',
    column.figure && 'text-right',
  );
  if (!column.value) {
    return (
      <th scope="col" className={look}>
        {column.header}
      </th>
    );
  }
  return (
    <th scope="col" className={look} aria-sort={sorted ? (sorted.descending ? 'descending' : 'ascending') : 'none'}>
      <button
        type="button"
        className="inline-flex min-h-6 cursor-pointer items-center gap-1 text-inherit [font-weight:inherit] hover:text-ink hover:underline"
        title={`Sort by ${columnName(column)}`}
        onClick={() => onSort(column.key)}
      >
        {column.header}
        <svg viewBox="0 0 8 12" aria-hidden="true" className="h-3 w-2 print:hidden" fill="currentColor">
          {sorted === null || !sorted.descending ? <path d="M4 0L8 5H0Z" opacity={sorted ? 1 : 0.35} /> : null}
          {sorted === null || sorted.descending ? <path d="M4 12L0 7H8Z" opacity={sorted ? 1 : 0.35} /> : null}
        </svg>
      </button>
    </th>
  );
}

/** Stands for the rows above or below those in view. */
function Spacer({ height, width }: { height: number; width: number }) {
  return (
    <tr aria-hidden="true">
      <td colSpan={width} style={{ height }} className="p-0" />
    </tr>
  );
}
