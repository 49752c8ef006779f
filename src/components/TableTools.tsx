import { useId, useState } from 'react';
import { csvText } from '../lib/csv-text.ts';
import { saveFile } from '../lib/save-file.ts';
import { Button } from './Button.tsx';
import { columnName, type Column } from './use-table-view.ts';

/** What a table can do besides being read. */
export interface TableFile {
  /** Name of the CSV file. */
  fileName: string;
  /** Comment lines at its head: what the figures are, and the cautions that go with them. */
  head: readonly string[];
}

/** Search, columns, copy and CSV, above a table. */
export function TableTools<Row>({
  caption,
  columns,
  hidden,
  rows,
  sought,
  onSeek,
  onToggle,
  file,
  searchable,
}: {
  caption: string;
  columns: readonly Column<Row>[];
  hidden: ReadonlySet<string>;
  /** As arranged: what is copied and saved. */
  rows: readonly Row[];
  sought: string;
  onSeek: (text: string) => void;
  onToggle: (key: string) => void;
  file: TableFile | undefined;
  searchable: boolean;
}) {
  const id = useId();
  const [said, setSaid] = useState('');
  const exported = columns.filter(({ key, value }) => value !== undefined && !hidden.has(key));
  const cells = () => rows.map((row) => exported.map(({ value }) => value?.(row) ?? null));

  async function copy() {
    const tabs = [exported.map(columnName), ...cells()]
      .map((line) => line.map((cell) => cell ?? '').join('\t'))
      .join('\n');
    try {
      await navigator.clipboard.writeText(tabs);
      setSaid(`${rows.length.toLocaleString()} rows copied.`);
    } catch {
      setSaid('The browser did not allow copying. Save the CSV instead.');
    }
  }

  return (
    <div className="mb-2 flex flex-wrap items-center gap-x-4 gap-y-1 text-quiet print:hidden">
      {searchable ? (
        <span className="flex items-center gap-2">
          <label htmlFor={id} className="font-semibold text-ink2">
            Find
          </label>
          <input
            id={id}
            type="search"
            value={sought}
            onChange={(event) => onSeek(event.target.value)}
            className="h-9 w-44 rounded-button border-2 border-edge bg-paper px-2"
          />
          <span role="status" className="text-ink2">
            {sought.trim() === '' ? '' : `${rows.length.toLocaleString()} found`}
          </span>
        </span>
      ) : null}
      {file ? (
        <>
          <details className="relative">
            <summary className="link min-h-9 cursor-pointer content-center font-semibold">Columns</summary>
            <fieldset className="absolute z-30 grid min-w-44 gap-1 border-t-[3px] border-ink bg-paper p-3">
              <legend className="sr-only">Columns of {caption}</legend>
              {columns
                .filter(({ rowHeader }) => !rowHeader)
                .map((column) => (
                  <label key={column.key} className="flex min-h-7 items-center gap-2">
                    <input type="checkbox" checked={!hidden.has(column.key)} onChange={() => onToggle(column.key)} />
                    {columnName(column)}
                  </label>
                ))}
            </fieldset>
          </details>
          <Button look="quiet" onClick={() => void copy()}>
            Copy
          </Button>
          <Button
            look="quiet"
            onClick={() => saveFile(file.fileName, 'text/csv', [csvText(file.head, exported.map(columnName), cells())])}
          >
            Save as CSV
          </Button>
          <span role="status" className="text-ink2">
            {said}
          </span>
        </>
      ) : null}
    </div>
  );
}
