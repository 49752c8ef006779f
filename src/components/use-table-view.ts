import { useState } from 'react';
import type { ReactNode } from 'react';

export interface Column<Row> {
  /** Unique within the table. */
  key: string;
  header: ReactNode;
  cell: (row: Row) => ReactNode;
  /** Figures stand right-aligned under each other. */
  figure?: boolean;
  /** The cell that names its row. */
  rowHeader?: boolean;
  /** What the column sorts, searches and exports by; a column without it does none of them. */
  value?: (row: Row) => string | number | null;
  /** The header as text, where it is not one; the key if there is neither. */
  name?: string;
}

export interface Sorting {
  key: string;
  descending: boolean;
}

const collator = new Intl.Collator(undefined, { numeric: true, sensitivity: 'base' });

/** Ascending; what is missing stands last either way. */
function compareValues(a: string | number | null, b: string | number | null, descending: boolean): number {
  if (a === null || b === null) return a === b ? 0 : a === null ? 1 : -1;
  const order = typeof a === 'number' && typeof b === 'number' ? a - b : collator.compare(String(a), String(b));
  return descending ? -order : order;
}

export function columnName<Row>(column: Column<Row>): string {
  return column.name ?? (typeof column.header === 'string' ? column.header : column.key);
}

/** The rows that hold every word sought, in the order asked for; the order given where none is. */
export function arrangeRows<Row>(
  rows: readonly Row[],
  columns: readonly Column<Row>[],
  sorting: Sorting | null,
  sought: string,
): readonly Row[] {
  const words = sought.toLocaleLowerCase().split(/\s+/).filter(Boolean);
  const texts = columns.flatMap(({ value }) => (value ? [value] : []));
  const found =
    words.length === 0
      ? rows
      : rows.filter((row) => {
          const text = texts.map((value) => String(value(row) ?? '').toLocaleLowerCase()).join(' ');
          return words.every((word) => text.includes(word));
        });
  const by = sorting ? columns.find(({ key }) => key === sorting.key)?.value : undefined;
  if (!sorting || !by) return found;
  return [...found].sort((a, b) => compareValues(by(a), by(b), sorting.descending));
}

/** How a reader has arranged a table: sorted, searched, columns left out. */
export function useTableView<Row>(rows: readonly Row[], columns: readonly Column<Row>[]) {
  const [sorting, setSorting] = useState<Sorting | null>(null);
  const [sought, setSought] = useState('');
  const [hidden, setHidden] = useState<ReadonlySet<string>>(new Set());
  return {
    sorting,
    sought,
    hidden,
    setSought,
    /** Ascending, then descending, then as it came. */
    sortBy: (key: string) =>
      setSorting((now) =>
        now?.key !== key ? { key, descending: false } : now.descending ? null : { key, descending: true },
      ),
    toggleColumn: (key: string) =>
      setHidden((now) => (now.has(key) ? new Set([...now].filter((other) => other !== key)) : new Set([...now, key]))),
    columns: columns.filter(({ key }) => !hidden.has(key)),
    rows: arrangeRows(rows, columns, sorting, sought),
  };
}
