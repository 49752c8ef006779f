const daysInMonth = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

/** Days from 1970-01-01 to a date of the Gregorian calendar (Howard Hinnant, "chrono-compatible low-level date algorithms"). */
export function daysFromCivil(year: number, month: number, day: number): number {
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYear = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear;
  return era * 146_097 + dayOfEra - 719_468;
}

/** True for a day that the calendar has. */
export function isCivilDate(year: number, month: number, day: number): boolean {
  if (month < 1 || month > 12 || day < 1 || day > daysInMonth[month - 1]) return false;
  return month !== 2 || day < 29 || (year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0));
}

function digitsAt(text: string, from: number, count: number): number {
  let value = 0;
  for (let index = from; index < from + count; index += 1) {
    const digit = text.charCodeAt(index) - 48;
    if (!(digit >= 0 && digit <= 9)) return NaN;
    value = value * 10 + digit;
  }
  return value;
}

/**
 * Reads an ISO 8601 instant: YYYY-MM-DDThh:mm, with seconds and a fraction if given, and Z or an
 * offset (+hh:mm, +hhmm, +hh). A space may stand for the T. Fractions are cut off.
 * @returns UTC seconds; NaN if it is not one, or has no offset
 */
export function parseInstant(text: string): number {
  const length = text.length;
  if (length < 17) return NaN;
  const year = digitsAt(text, 0, 4);
  const month = digitsAt(text, 5, 2);
  const day = digitsAt(text, 8, 2);
  const hour = digitsAt(text, 11, 2);
  const minute = digitsAt(text, 14, 2);
  const between = text.charCodeAt(10);
  if (text[4] !== '-' || text[7] !== '-' || text[13] !== ':' || (between !== 84 && between !== 116 && between !== 32))
    return NaN;
  let at = 16;
  let second = 0;
  if (text[at] === ':') {
    second = digitsAt(text, at + 1, 2);
    at += 3;
    if (text[at] === '.' || text[at] === ',') {
      at += 1;
      const from = at;
      while (at < length && text.charCodeAt(at) >= 48 && text.charCodeAt(at) <= 57) at += 1;
      if (at === from) return NaN;
    }
  }
  const isTime = hour <= 23 && minute <= 59 && second <= 60;
  if (!isTime || !isCivilDate(year, month, day)) return NaN;
  const local = daysFromCivil(year, month, day) * 86_400 + hour * 3600 + minute * 60 + Math.min(second, 59);
  const sign = text[at];
  if (sign === 'Z' || sign === 'z') return at + 1 === length ? local : NaN;
  if (sign !== '+' && sign !== '-') return NaN;
  const rest = length - at - 1;
  const offsetHours = digitsAt(text, at + 1, 2);
  let offsetMinutes = 0;
  if (rest === 5 && text[at + 3] === ':') offsetMinutes = digitsAt(text, at + 4, 2);
  else if (rest === 4) offsetMinutes = digitsAt(text, at + 3, 2);
  else if (rest !== 2) return NaN;
  if (!(offsetHours <= 14 && offsetMinutes <= 59)) return NaN;
  return local - (sign === '+' ? 1 : -1) * (offsetHours * 3600 + offsetMinutes * 60);
}

const twoDigits = Array.from({ length: 60 }, (_, value) => String(value).padStart(2, '0'));
let lastDay = NaN;
let lastDate = '';

/** Writes an instant as this product's files have it, for instance 2031-04-05T06:07:00Z. */
export function formatInstant(utcSeconds: number): string {
  const day = Math.floor(utcSeconds / 86_400);
  if (day !== lastDay) {
    lastDate = new Date(day * 86_400_000).toISOString().slice(0, 10);
    lastDay = day;
  }
  const second = utcSeconds - day * 86_400;
  const minute = Math.floor(second / 60);
  return `${lastDate}T${twoDigits[Math.floor(minute / 60)]}:${twoDigits[minute % 60]}:${twoDigits[Math.floor(second % 60)]}Z`;
}
