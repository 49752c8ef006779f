import { csvRecord } from './csv-record.ts';
import { openWorkbook, RichText, type Workbook } from './open-workbook.ts';
import { readXml, type XmlListener } from './read-xml.ts';
import { openZipEntry } from './read-zip.ts';
import { UnreadableFileError } from './unreadable-file.ts';
import { serialText } from './workbook-date.ts';

/** More columns than this are no log; a stray cell far to the right would otherwise widen every row. */
const mostColumns = 2000;

export type SheetFacts = Pick<Workbook, 'sheetName' | 'otherSheets'>;

/**
 * Reads the first sheet of an .xlsx workbook as CSV text, row by row, in memory that does not grow with it.
 * Cells that show a date or a time come out as local times without a zone.
 * @param onText gets each piece; reading goes on once it resolves, and stops when it resolves to false
 * @param onBytes told how many bytes of the file were read; all of them once it is done
 */
export async function readWorkbook(
  file: Blob,
  onText: (text: string) => boolean | Promise<boolean>,
  onBytes: (bytes: number) => void,
): Promise<SheetFacts> {
  const workbook = await openWorkbook(file);
  onBytes(Math.max(0, file.size - workbook.sheet.packedSize));
  const rows = new SheetRows(workbook);
  const bytes = await openZipEntry(file, workbook.sheet, onBytes);
  await readXml(bytes, rows, () => {
    const text = rows.take();
    return text === '' || onText(text);
  });
  const { sheetName, otherSheets } = workbook;
  return { sheetName, otherSheets };
}

/** Hears a sheet's XML and gathers its rows as CSV text. */
class SheetRows implements XmlListener {
  private readonly workbook: Workbook;
  private readonly rich = new RichText();
  private made = '';
  private width = 0;
  private cells: string[] = [];
  private column = -1;
  private kind = '';
  private style = 0;
  private value = '';
  private inValue = false;

  constructor(workbook: Workbook) {
    this.workbook = workbook;
  }

  /** The rows since the last call. */
  take(): string {
    const { made } = this;
    this.made = '';
    return made;
  }

  open(name: string, attributes: () => Record<string, string>): void {
    if (name === 'c') {
      const given = attributes();
      this.column = given.r ? columnOf(given.r) : this.column + 1;
      if (this.column >= mostColumns)
        throw new UnreadableFileError(
          'The sheet has cells beyond its 2,000th column. Delete them, or save the visits as CSV (UTF-8).',
        );
      this.kind = given.t ?? 'n';
      this.style = Number(given.s ?? 0);
      this.value = '';
      this.rich.begin();
    } else if (name === 'v') this.inValue = true;
    else if (name === 'row') {
      this.cells = [];
      this.column = -1;
    } else this.rich.open(name);
  }

  text(piece: string): void {
    if (this.inValue) this.value += piece;
    else if (this.kind === 'inlineStr') this.rich.add(piece);
  }

  close(name: string): void {
    if (name === 'v') this.inValue = false;
    else if (name === 'c') {
      const shown = this.shown();
      if (shown === '') return;
      while (this.cells.length < this.column) this.cells.push('');
      this.cells[this.column] = shown;
    } else if (name === 'row') this.endRow();
    else this.rich.close(name);
  }

  private endRow(): void {
    // A row of empty cells is none. The first row with a cell is the header, and the others are as wide.
    if (this.cells.length === 0) return;
    if (this.width === 0) this.width = this.cells.length;
    while (this.cells.length < this.width) this.cells.push('');
    this.made += csvRecord(this.cells);
  }

  private shown(): string {
    const { kind, value, workbook } = this;
    if (kind === 'inlineStr') return this.rich.end();
    if (kind === 's') return workbook.strings[Number(value)] ?? '';
    if (kind === 'b') return value === '1' ? 'true' : 'false';
    if (kind !== 'n' || value === '') return value;
    const number = Number(value);
    if (Number.isNaN(number)) return value;
    const shows = workbook.styles[this.style] ?? null;
    return shows === null ? String(number) : serialText(number, workbook.epoch, shows);
  }
}

/** "AB12" is column 27. */
function columnOf(reference: string): number {
  let column = 0;
  for (let at = 0; at < reference.length; at += 1) {
    const letter = reference.charCodeAt(at) & ~32;
    if (letter < 65 || letter > 90) break;
    column = column * 26 + letter - 64;
  }
  return column - 1;
}
