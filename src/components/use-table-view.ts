import { useState } from 'react';
import type { ReactNode } from 'react';
import { compareValues, hasOrderOfItsOwn, type CellValue } from './compare-values.ts';
import { nodeText } from './node-text.ts';

export interface Column<Row> {
  /** Unique within the table. */
  key: string;
  header: ReactNode;
  cell: (row: Row) => ReactNode;
  /** Figures stand right-aligned under each other. */
  figure?: boolean;
  /** The cell that names its row. */
  rowHeader?: boolean;
  /** What the column sorts, searches and exports by; without it, the words of its cells. */
  value?: (row: Row) => CellValue;
  /** The header as text, where it is not one; the key if there is neither. */
  name?: string;
}

/** A column that says by what it sorts and exports. */
export interface KnownColumn<Row> extends Column<Row> {
  sortable: boolean;
}

export interface Sorting {
  key: string;
  descending: boolean;
}

/** From here on an order can be chosen. */
const sortFrom = 3;
/** Cells are read for their words in tables up to this long; longer ones need a `value`. */
const readUpTo = 400;

export function columnName<Row>(column: Column<Row>): string {
  return column.name ?? (nodeText(column.header) || column.key);
}

/** Gives a column without a `value` the words of its cells; days without a year keep the order in which they stand. */
export function knowColumn<Row>(column: Column<Row>, rows: readonly Row[]): KnownColumn<Row> {
  if (column.value) return { ...column, sortable: true };
  const { cell } = column;
  const sample = rows.length > readUpTo ? [] : rows.slice(0, 12).map((row) => nodeText(cell(row)));
  // Buttons, fields or drawings alone: nothing to sort or to save.
  if (sample.every((text) => text === '')) return { ...column, sortable: false };
  return {
    ...column,
    value: (row) => nodeText(cell(row)),
    sortable: rows.length >= sortFrom && !sample.some(hasOrderOfItsOwn),
  };
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
  return found
    .map((row) => ({ row, value: by(row) }))
    .sort((a, b) => compareValues(a.value, b.value, sorting.descending))
    .map(({ row }) => row);
}

/** How a reader has arranged a table: sorted, searched, columns left out. */
export function useTableView<Row>(rows: readonly Row[], given: readonly Column<Row>[]) {
  const [sorting, setSorting] = useState<Sorting | null>(null);
  const [sought, setSought] = useState('');
  const [hidden, setHidden] = useState<ReadonlySet<string>>(new Set());
  const all = given.map((column) => knowColumn(column, rows));
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
    /** Every column, left out or not. */
    all,
    columns: all.filter(({ key }) => !hidden.has(key)),
    rows: arrangeRows(rows, all, sorting, sought),
  };
}
