import { strToU8, zipSync } from 'fflate';

/** A cell of a made workbook: text, a number, a number under a style of `formats`, or anything as raw XML. */
export type MadeCell =
  string | number | { serial: number; style: number } | { xml: (reference: string) => string } | null;

const main = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main';
const head = '<?xml version="1.0" encoding="UTF-8"?>';
const escaped = (text: string) =>
  text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');

/** "AB" is column 27. */
export function columnName(index: number): string {
  return (index >= 26 ? columnName(Math.floor(index / 26) - 1) : '') + String.fromCharCode(65 + (index % 26));
}

/** An .xlsx workbook made by hand, zipped by fflate. Style 0 is General, 1 to n are `formats`; texts are shared. */
export function buildWorkbook(
  sheets: readonly { name: string; rows: readonly (readonly MadeCell[])[] }[],
  {
    formats = ['yyyy-mm-dd hh:mm', 'dd/mm/yyyy', 'h:mm', '0.00'],
    date1904 = false,
    leaveOut = [],
    level = 6,
  }: { formats?: string[]; date1904?: boolean; leaveOut?: string[]; level?: 0 | 6 } = {},
): Uint8Array<ArrayBuffer> {
  const strings: string[] = [];
  const places = new Map<string, number>();
  const cellXml = (cell: MadeCell, reference: string): string => {
    if (cell === null) return '';
    if (typeof cell === 'number') return `<c r="${reference}"><v>${String(cell)}</v></c>`;
    if (typeof cell === 'object')
      return 'xml' in cell
        ? cell.xml(reference)
        : `<c r="${reference}" s="${String(cell.style)}"><v>${String(cell.serial)}</v></c>`;
    let place = places.get(cell);
    if (place === undefined) {
      place = strings.length;
      places.set(cell, place);
      strings.push(cell);
    }
    return `<c r="${reference}" t="s"><v>${String(place)}</v></c>`;
  };
  const sheetXml = (rows: readonly (readonly MadeCell[])[]) =>
    `${head}<worksheet xmlns="${main}"><sheetData>${rows
      .map(
        (row, index) =>
          `<row r="${String(index + 1)}">${row.map((cell, column) => cellXml(cell, `${columnName(column)}${String(index + 1)}`)).join('')}</row>`,
      )
      .join('')}</sheetData></worksheet>`;
  const relation = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships';
  const files: Record<string, string> = {
    '[Content_Types].xml': `${head}<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"/>`,
    'xl/workbook.xml': `${head}<workbook xmlns="${main}" xmlns:r="${relation}"><workbookPr${date1904 ? ' date1904="1"' : ''}/><sheets>${sheets
      .map(
        ({ name }, index) =>
          `<sheet name="${escaped(name)}" sheetId="${String(index + 1)}" r:id="rId${String(index + 1)}"/>`,
      )
      .join('')}</sheets></workbook>`,
    'xl/_rels/workbook.xml.rels': `${head}<Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">${sheets
      .map(
        (_, index) =>
          `<Relationship Id="rId${String(index + 1)}" Type="${relation}/worksheet" Target="worksheets/sheet${String(index + 1)}.xml"/>`,
      )
      .join(
        '',
      )}<Relationship Id="st" Type="${relation}/styles" Target="styles.xml"/><Relationship Id="ss" Type="${relation}/sharedStrings" Target="sharedStrings.xml"/></Relationships>`,
    'xl/styles.xml': `${head}<styleSheet xmlns="${main}"><numFmts>${formats
      .map((code, index) => `<numFmt numFmtId="${String(164 + index)}" formatCode="${escaped(code)}"/>`)
      .join('')}</numFmts><cellStyleXfs><xf numFmtId="14"/></cellStyleXfs><cellXfs><xf numFmtId="0"/>${formats
      .map((_, index) => `<xf numFmtId="${String(164 + index)}"/>`)
      .join('')}</cellXfs></styleSheet>`,
  };
  sheets.forEach(({ rows }, index) => {
    files[`xl/worksheets/sheet${String(index + 1)}.xml`] = sheetXml(rows);
  });
  files['xl/sharedStrings.xml'] =
    `${head}<sst xmlns="${main}">${strings.map((text) => `<si><t xml:space="preserve">${escaped(text)}</t></si>`).join('')}</sst>`;
  const kept = Object.entries(files).filter(([name]) => !leaveOut.includes(name));
  return zipSync(Object.fromEntries(kept.map(([name, text]) => [name, strToU8(text)])), {
    level,
  });
}

/** Serial number of a wall-clock time, 1900 epoch: whole days since 1899-12-30 and their fraction. */
export function serialOf(year: number, month: number, day: number, hour = 0, minute = 0, second = 0): number {
  return Date.UTC(year, month - 1, day, hour, minute, second) / 86_400_000 + 25_569;
}
