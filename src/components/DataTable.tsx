import { lazy, Suspense, useRef } from 'react';
import type { ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';
import { TableFinder, TableSaver, type TableFile } from './TableTools.tsx';
import { useFits } from './use-fits.ts';
import { columnName, useTableView, type Column, type KnownColumn } from './use-table-view.ts';

export type { Column } from './use-table-view.ts';

/** Beyond this many rows only those in view stand in the page. */
const virtualFrom = 150;
/** From here on a reader may search. */
const searchFrom = 12;
/** From here on a table is worth copying and saving. */
const saveFrom = 4;
/** More columns than this may be left out. */
const chooseBeyond = 6;

// Few tables are long: the others do without its script.
const RowsInView = lazy(async () => ({ default: (await import('./RowsInView.tsx')).RowsInView }));

/**
 * A table with a caption, scrollable sideways by touch and keyboard where it is wider than the page. It is sorted by its
 * headers, searched, copied and saved by the words of its cells or, better, a column's `value`. The head stays in view;
 * long ones scroll under it.
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
  /** Name and head of what is saved; false where the table is a form and there is nothing to save. */
  file?: TableFile | false;
}) {
  const view = useTableView(givenRows, given);
  const { columns, rows } = view;
  const ref = useRef<HTMLDivElement>(null);
  const fits = useFits(ref);
  const long = rows.length > virtualFrom;
  const none = view.sought.trim() !== '' && rows.length === 0 ? 'No row holds that.' : empty;

  const tableRow = (row: Row, index: number) => (
    <tr key={rowKey(row)} className="border-b border-hair" {...(long ? { 'aria-rowindex': index + 2 } : {})}>
      {columns.map((column) => {
        const look = classNames(
          'px-2 py-2.5 align-top first:pl-0',
          // On a phone the table scrolls rather than squeeze words into letters.
          column.figure ? 'text-right' : 'min-w-28',
          columns.length > 4 && (column.figure ? 'max-sm:min-w-24' : 'max-sm:min-w-36'),
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
  );

  return (
    <div>
      {file === false ||
      (file === undefined && givenRows.length < searchFrom && given.length <= chooseBeyond) ? null : (
        <TableFinder
          {...{ caption, rows }}
          columns={view.all}
          hidden={view.hidden}
          sought={view.sought}
          onSeek={view.setSought}
          onToggle={view.toggleColumn}
          searchable={givenRows.length >= searchFrom}
          choosable={givenRows.length > 0 && (file !== undefined || given.length > chooseBeyond)}
        />
      )}
      <div
        ref={ref}
        className={classNames(
          'relative',
          // Without a scroll area of its own, the head keeps to the top of the window.
          long ? 'max-h-[70vh] overflow-auto' : fits ? null : 'overflow-x-auto',
        )}
        {...(fits && !long ? {} : { role: 'region', 'aria-label': caption, tabIndex: 0 })}
      >
        <table className="w-full border-collapse text-left" {...(long ? { 'aria-rowcount': rows.length + 1 } : {})}>
          <caption className={captionHidden ? 'sr-only' : 'pb-2 text-left font-bold text-ink'}>{caption}</caption>
          <thead className="sticky top-0 z-10 bg-water print:static [dialog_&]:bg-paper">
            <tr className="border-b-2 border-edge">
              {columns.map((column) => (
                <HeaderCell key={column.key} column={column} sorting={view.sorting} onSort={view.sortBy} />
              ))}
            </tr>
          </thead>
          <tbody>
            {long ? (
              <Suspense fallback={rows.slice(0, 20).map(tableRow)}>
                <RowsInView
                  count={rows.length}
                  scroller={ref}
                  columns={columns.length}
                  row={(index) => tableRow(rows[index], index)}
                />
              </Suspense>
            ) : (
              rows.map(tableRow)
            )}
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
      {file !== false && (file !== undefined || givenRows.length >= saveFrom) ? (
        <TableSaver {...{ caption, rows, columns, file }} />
      ) : null}
    </div>
  );
}

function HeaderCell<Row>({
  column,
  sorting,
  onSort,
}: {
  column: KnownColumn<Row>;
  sorting: { key: string; descending: boolean } | null;
  onSort: (key: string) => void;
}) {
  const sorted = sorting?.key === column.key ? sorting : null;
  const look = classNames(
    'px-2 py-2 align-bottom text-quiet font-bold text-ink2 first:pl-0',
    column.figure && 'text-right',
  );
  if (!column.sortable) {
    return (
      <th scope="col" className={look}>
        <span className="inline-flex min-h-6 items-center">{column.header}</span>
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
