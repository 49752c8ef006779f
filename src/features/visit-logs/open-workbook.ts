import { formatShows, type Shows } from './workbook-date.ts';
import { readXml, type XmlListener } from './read-xml.ts';
import { listZip, openZipEntry, type ZipEntry } from './read-zip.ts';
import { UnreadableFileError } from './unreadable-file.ts';

/** A workbook whose first sheet can be read: everything that its cells refer to. */
export interface Workbook {
  sheet: ZipEntry;
  sheetName: string;
  /** Sheets besides the first, which are not read. */
  otherSheets: number;
  epoch: 1900 | 1904;
  /** What each cell style shows of a number. */
  styles: Shows[];
  strings: string[];
}

/** Texts that cells share are held in memory; more of them than this are refused. */
const mostSharedBytes = 400_000_000;

/**
 * Opens an .xlsx workbook (ECMA-376) and reads all but its sheets.
 * @throws UnreadableFileError with a message for the person
 */
export async function openWorkbook(file: Blob): Promise<Workbook> {
  const entries = await listZip(file);
  const read = async (name: string, listener: XmlListener) => {
    const entry = entries.get(name.toLowerCase());
    if (entry) await readXml(await openZipEntry(file, entry), listener);
    return entry !== undefined;
  };
  const sheets: { name: string; rel: string }[] = [];
  let epoch: 1900 | 1904 = 1900;
  const found = await read('xl/workbook.xml', {
    open(name, attributes) {
      if (name === 'sheet') {
        const given = attributes();
        const rel = Object.entries(given).find(([key]) => key.endsWith(':id'))?.[1] ?? '';
        sheets.push({ name: plainText(given.name ?? ''), rel });
      } else if (name === 'workbookPr' && /^(?:1|true)$/.test(attributes().date1904 ?? '')) epoch = 1904;
    },
  });
  if (!found || sheets.length === 0) throw new UnreadableFileError(notWorkbook(entries));
  const targets = new Map<string, string>();
  let stringsTarget = 'sharedStrings.xml';
  let stylesTarget = 'styles.xml';
  await read('xl/_rels/workbook.xml.rels', {
    open(name, attributes) {
      if (name !== 'Relationship') return;
      const { Id: id = '', Target: target = '', Type: type = '' } = attributes();
      targets.set(id, target);
      if (type.endsWith('/sharedStrings')) stringsTarget = target;
      else if (type.endsWith('/styles')) stylesTarget = target;
    },
  });
  const sheet = entries.get(partName(targets.get(sheets[0].rel) ?? 'worksheets/sheet1.xml'));
  if (!sheet)
    throw new UnreadableFileError(
      'The first sheet of the workbook is not a sheet of cells. Save the sheet with the visits as CSV (UTF-8).',
    );
  const shared = entries.get(partName(stringsTarget));
  if (shared && shared.size > mostSharedBytes)
    throw new UnreadableFileError(
      'The workbook holds too many different texts to be read here. Save the sheet as CSV (UTF-8).',
    );
  const styles: Shows[] = [];
  await read(partName(stylesTarget), styleListener(styles));
  const strings: string[] = [];
  await read(partName(stringsTarget), sharedListener(strings));
  return { sheet, sheetName: sheets[0].name, otherSheets: sheets.length - 1, epoch, styles, strings };
}

function partName(target: string): string {
  return (target.startsWith('/') ? target.slice(1) : `xl/${target}`).toLowerCase();
}

function notWorkbook(entries: ReadonlyMap<string, ZipEntry>): string {
  if (entries.has('xl/workbook.bin'))
    return 'This is a binary workbook (.xlsb). Save it as .xlsx, or save the sheet as CSV (UTF-8).';
  if (entries.has('content.xml')) return 'This is an OpenDocument file. Save the sheet as .xlsx or as CSV (UTF-8).';
  return 'This is a zip archive without a workbook in it. Unpack it and choose the CSV file.';
}

function styleListener(styles: Shows[]): XmlListener {
  const codes = new Map<number, string>();
  let inCellFormats = false;
  return {
    open(name, attributes) {
      if (name === 'numFmt') {
        const { numFmtId, formatCode } = attributes();
        codes.set(Number(numFmtId), plainText(formatCode ?? ''));
      } else if (name === 'cellXfs') inCellFormats = true;
      else if (name === 'xf' && inCellFormats) {
        const id = Number(attributes().numFmtId ?? 0);
        styles.push(formatShows(id, codes.get(id)));
      }
    },
    close(name) {
      if (name === 'cellXfs') inCellFormats = false;
    },
  };
}

function sharedListener(strings: string[]): XmlListener {
  const text = new RichText();
  return {
    open(name) {
      if (name === 'si') text.begin();
      else text.open(name);
    },
    text: (piece) => {
      text.add(piece);
    },
    close(name) {
      if (name === 'si') strings.push(text.end());
      else text.close(name);
    },
  };
}

/** A text that may be made of runs, without their looks and without its phonetic reading. */
export class RichText {
  private text = '';
  private inText = false;
  private inPhonetic = false;

  begin(): void {
    this.text = '';
    this.inText = false;
    this.inPhonetic = false;
  }

  open(name: string): void {
    if (name === 't') this.inText = !this.inPhonetic;
    else if (name === 'rPh') this.inPhonetic = true;
  }

  add(piece: string): void {
    if (this.inText) this.text += piece;
  }

  close(name: string): void {
    if (name === 't') this.inText = false;
    else if (name === 'rPh') this.inPhonetic = false;
  }

  end(): string {
    // ST_Xstring writes signs that XML cannot hold as _xHHHH_.
    return this.text.replace(/_x([0-9A-Fa-f]{4})_/g, (_, code: string) => String.fromCharCode(parseInt(code, 16)));
  }
}

const entities: Record<string, string> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: "'" };

/** An attribute's value with its entities decoded. */
function plainText(value: string): string {
  return value.replace(/&(?:#(\d+)|#x([0-9a-f]+)|(\w+));/gi, (whole, decimal?: string, hex?: string, name?: string) => {
    if (name !== undefined) return entities[name] ?? whole;
    const code = decimal === undefined ? parseInt(hex ?? '', 16) : Number(decimal);
    return code <= 0x10ffff ? String.fromCodePoint(code) : whole;
  });
}
