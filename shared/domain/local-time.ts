import { daysFromCivil, isCivilDate } from './instant.ts';

/** Which comes first where a date is written in figures without the year in front. */
export type DateOrder = 'day first' | 'month first';

const time = String.raw`(\d{1,2})[:.](\d{2})(?:[:.](\d{2})(?:[.,]\d+)?)?(?:\s*([AaPp])\.?[Mm]\.?)?`;
const yearFirst = new RegExp(String.raw`^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})(?:T|,?\s+)${time}$`);
const yearLast = new RegExp(String.raw`^(\d{1,2})[-/.](\d{1,2})[-/.](\d{4}|\d{2})(?:T|,?\s+)${time}$`);
const namedMonth = new RegExp(String.raw`^(\d{1,2})[-. ]+([A-Za-z]{3,9})\.?[-, ]+(\d{4}|\d{2})(?:T|,?\s+)${time}$`);
const namedMonthFirst = new RegExp(String.raw`^([A-Za-z]{3,9})\.?\s+(\d{1,2}),?\s+(\d{4})(?:T|,?\s+)${time}$`);
const compact = /^(\d{4})(\d{2})(\d{2})[T ]?(\d{2}):?(\d{2})(?::?(\d{2}))?$/;
const monthNames = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];

/**
 * Reads a date and time without an offset, as exports write them: year first, or day and month first
 * with the year last, a month by its (English) name, or all figures in one.
 * @param order decides 03/04/2031; a date that fits the other order only is not read
 * @returns what the clock on the wall showed, in seconds from 1970-01-01 00:00 on that clock; NaN if it
 * cannot be read, or has no time of day
 */
export function readLocalTime(text: string, order: DateOrder): number {
  let found = yearFirst.exec(text);
  if (found) return localSeconds(found[1], found[2], found[3], found);
  found = yearLast.exec(text);
  if (found) {
    return order === 'day first'
      ? localSeconds(found[3], found[2], found[1], found)
      : localSeconds(found[3], found[1], found[2], found);
  }
  found = compact.exec(text);
  if (found) return localSeconds(found[1], found[2], found[3], found);
  found = namedMonth.exec(text);
  if (found) return localSeconds(found[3], monthOf(found[2]), found[1], found);
  found = namedMonthFirst.exec(text);
  return found ? localSeconds(found[3], monthOf(found[1]), found[2], found) : NaN;
}

function monthOf(name: string): string {
  const index = monthNames.indexOf(name.slice(0, 3).toLowerCase());
  return index < 0 ? '0' : String(index + 1);
}

/** @param match its groups 4 to 7 are hour, minute, second, and a or p */
function localSeconds(yearText: string, monthText: string, dayText: string, match: RegExpExecArray): number {
  const year = yearText.length === 2 ? 2000 + Number(yearText) : Number(yearText);
  const month = Number(monthText);
  const day = Number(dayText);
  const half = (match[7] as string | undefined)?.toLowerCase();
  let hour = Number(match[4]);
  const minute = Number(match[5]);
  const second = Number((match[6] as string | undefined) ?? 0);
  if (half !== undefined) {
    if (hour < 1 || hour > 12) return NaN;
    hour = (hour % 12) + (half === 'p' ? 12 : 0);
  }
  // ISO 8601 once wrote the end of a day as 24:00, and exports still do.
  const isTime = (hour <= 23 && minute <= 59 && second <= 60) || (hour === 24 && minute === 0 && second === 0);
  if (!isTime || !isCivilDate(year, month, day)) return NaN;
  return daysFromCivil(year, month, day) * 86_400 + hour * 3600 + minute * 60 + Math.min(second, 59);
}

/** What the dates of a column say about their order. */
export type DateOrderVerdict = DateOrder | 'not needed' | 'ambiguous' | 'mixed';

/** Contrary dates up to this share of those that tell are taken for slips. */
const slips = 0.01;

/** Gathers evidence over a whole column: 25/12/2031 can only be day first, 12/25/2031 only month first. */
export class DateOrderTally {
  private dayFirst = 0;
  private monthFirst = 0;
  private either = 0;

  add(text: string): void {
    const separator = text.charCodeAt(1) < 48 ? 1 : text.charCodeAt(2) < 48 ? 2 : 0;
    if (separator === 0 || text.charCodeAt(separator) < 45) return;
    const first = Number(text.slice(0, separator));
    const second = parseInt(text.slice(separator + 1, separator + 3), 10);
    if (!(first >= 1 && second >= 1)) return;
    if (first > 12 && first <= 31 && second <= 12) this.dayFirst += 1;
    else if (second > 12 && second <= 31 && first <= 12) this.monthFirst += 1;
    else if (first <= 12 && second <= 12) this.either += 1;
  }

  /** Dates that tell, and that speak against the verdict: read as faults. */
  get contrary(): number {
    return Math.min(this.dayFirst, this.monthFirst);
  }

  verdict(): DateOrderVerdict {
    const telling = this.dayFirst + this.monthFirst;
    if (telling === 0) return this.either === 0 ? 'not needed' : 'ambiguous';
    if (this.contrary > slips * telling) return 'mixed';
    return this.dayFirst > this.monthFirst ? 'day first' : 'month first';
  }
}
