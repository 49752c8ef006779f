import type { ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';

export interface Column<Row> {
  /** Unique within the table. */
  key: string;
  header: ReactNode;
  cell: (row: Row) => ReactNode;
  /** Figures stand right-aligned under each other. */
  figure?: boolean;
  /** The cell that names its row. */
  rowHeader?: boolean;
}

/** A plain table with a caption, scrollable sideways by touch and keyboard where it is wider than the page. */
export function DataTable<Row>({
  caption,
  captionHidden = false,
  columns,
  rows,
  rowKey,
  empty,
}: {
  caption: string;
  captionHidden?: boolean;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  /** What stands in place of rows: what it means and what to do. */
  empty?: ReactNode;
}) {
  return (
    <div className="overflow-x-auto" role="region" aria-label={caption} tabIndex={0}>
      <table className="w-full border-collapse text-left">
        <caption className={captionHidden ? 'sr-only' : 'pb-2 text-left font-bold text-ink'}>{caption}</caption>
        <thead>
          <tr className="border-b-2 border-edge">
            {columns.map((column) => (
              <th
                key={column.key}
                scope="col"
                className={classNames(
                  'px-2 py-2 align-bottom text-quiet font-bold text-ink2 first:pl-0',
                  column.figure && 'text-right',
                )}
              >
                {column.header}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={rowKey(row)} className="border-b border-hair">
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
          {rows.length === 0 && empty ? (
            <tr>
              <td colSpan={columns.length} className="py-4 text-ink2">
                {empty}
              </td>
            </tr>
          ) : null}
        </tbody>
      </table>
    </div>
  );
}
