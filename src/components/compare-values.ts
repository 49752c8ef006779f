export type CellValue = string | number | null;

const collator = new Intl.Collator(undefined, { numeric: true, sensitivity: 'base' });
const months = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];

/** A number as this product prints it: "1,260", "−2", "+3", "<1 %", "12.5 %". */
function printedNumber(text: string): number | null {
  const found = /^([+−-]?)([<>]?)([\d,]+(?:\.\d+)?)\s?%?$/.exec(text);
  if (!found) return null;
  const [, sign, bound, digits] = found;
  const size = Number(digits.replaceAll(',', '')) + (bound === '<' ? -0.5 : bound === '>' ? 0.5 : 0);
  return sign === '−' || sign === '-' ? -size : size;
}

/** A date as this product prints it, "20 Nov 2026", "Fri 20 Nov 2026" or "20 Nov 2026, 18:40", as something that sorts. */
function printedDate(text: string): number | null {
  const found = /^(?:[A-Z][a-z]{2} )?(\d{1,2}) ([A-Z][a-z]{2}) (\d{4})(?:, (\d\d):(\d\d))?/.exec(text);
  if (!found) return null;
  const [, day, name, year, hour = '0', minute = '0'] = found;
  const month = months.indexOf(name.toLowerCase());
  if (month < 0) return null;
  return (((Number(year) * 12 + month) * 31 + Number(day)) * 24 + Number(hour)) * 60 + Number(minute);
}

const missing = (value: CellValue) => value === null || value === '' || value === '–';

/** Numbers as numbers and dates as dates, printed ones too; what is missing stands last either way. */
export function compareValues(a: CellValue, b: CellValue, descending: boolean): number {
  if (missing(a) || missing(b)) return Number(missing(a)) - Number(missing(b));
  const order = inOrder(a ?? '', b ?? '');
  return descending ? -order : order;
}

function inOrder(a: string | number, b: string | number): number {
  for (const read of [printedNumber, printedDate]) {
    const first = typeof a === 'number' ? a : read(a);
    const second = typeof b === 'number' ? b : read(b);
    if (first !== null && second !== null) return first - second;
  }
  return collator.compare(String(a), String(b));
}

const days = '(?:(?:Mon|Tues|Wednes|Thurs|Fri|Satur|Sun)day|Mon|Tue|Wed|Thu|Fri|Sat|Sun)';
const yearless = new RegExp(String.raw`^(?:${days}\b|\d{1,2} [A-Z][a-z]{2}(?![a-z]* \d{4})|\d{2}:\d{2})`);

/** A day or hour without its date ("Wed 2 Dec", "21:00"): in order as it stands, but not by its letters. */
export function hasOrderOfItsOwn(text: string): boolean {
  return printedDate(text) === null && yearless.test(text);
}
