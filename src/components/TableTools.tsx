import { useId, useState } from 'react';
import { csvText } from '../lib/csv-text.ts';
import { fileCautions, fileNameOf } from '../lib/file-cautions.ts';
import { saveFile } from '../lib/save-file.ts';
import { columnName, type Column } from './use-table-view.ts';

const quiet = 'link min-h-6 cursor-pointer text-quiet font-semibold text-ink2';

/** What is saved of a table, where its caption and the common cautions do not say it all. */
export interface TableFile {
  /** Name of the CSV file. */
  fileName: string;
  /** Comment lines at its head: what the figures are, and the cautions that go with them. */
  head: readonly string[];
}

/** Search and choice of columns, above a table. */
export function TableFinder<Row>({
  caption,
  columns,
  hidden,
  rows,
  sought,
  onSeek,
  onToggle,
  searchable,
  choosable,
}: {
  caption: string;
  columns: readonly Column<Row>[];
  hidden: ReadonlySet<string>;
  /** As arranged. */
  rows: readonly Row[];
  sought: string;
  onSeek: (text: string) => void;
  onToggle: (key: string) => void;
  searchable: boolean;
  choosable: boolean;
}) {
  const id = useId();
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
            className="h-9 w-44 rounded-t-field border-0 border-b-2 border-edge bg-paper px-2"
          />
          <span role="status" className="text-ink2">
            {sought.trim() === '' ? '' : `${rows.length.toLocaleString()} found`}
          </span>
        </span>
      ) : null}
      {choosable ? (
        <details className="relative">
          <summary className="link min-h-9 cursor-pointer content-center font-semibold">Columns</summary>
          <fieldset className="absolute z-30 grid min-w-44 gap-1 border-t-[3px] border-ink bg-paper p-3">
            <legend className="sr-only">Columns of {caption}</legend>
            {columns
              .filter(({ rowHeader }) => !rowHeader)
              .map((column) => (
                <label key={column.key} className="flex min-h-7 items-center gap-2">
                  <input
                    type="checkbox"
                    className="size-4.5 accent-act"
                    checked={!hidden.has(column.key)}
                    onChange={() => onToggle(column.key)}
                  />
                  {columnName(column)}
                </label>
              ))}
          </fieldset>
        </details>
      ) : null}
    </div>
  );
}

/** Copy and CSV, beneath a table: the rows and columns as they stand in it. */
export function TableSaver<Row>({
  caption,
  rows,
  columns,
  file,
}: {
  caption: string;
  rows: readonly Row[];
  columns: readonly Column<Row>[];
  file: TableFile | undefined;
}) {
  const [said, setSaid] = useState('');
  const exported = columns.filter(({ value }) => value !== undefined);
  if (exported.length === 0 || rows.length === 0) return null;
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

  function save() {
    const name = file?.fileName ?? `${fileNameOf(caption)}.csv`;
    // The tab says which place and site the figures are of.
    const head = file?.head ?? [`${caption} (${document.title})`, ...fileCautions];
    saveFile(name, 'text/csv', [csvText(head, exported.map(columnName), cells())]);
  }

  return (
    <p className="mt-1 flex flex-wrap items-center gap-x-4 print:hidden">
      <button type="button" className={quiet} aria-label={`Copy: ${caption}`} onClick={() => void copy()}>
        Copy
      </button>
      <button type="button" className={quiet} aria-label={`Save as CSV: ${caption}`} onClick={save}>
        Save as CSV
      </button>
      <span role="status" className="text-quiet text-ink2">
        {said}
      </span>
    </p>
  );
}
