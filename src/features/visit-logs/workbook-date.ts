/** What a number format shows of a serial number: a date alone, the time of day (with a date or without), or neither. */
export type Shows = 'date' | 'clock' | null;

/**
 * What a number format shows.
 * @param id of the format; 14 to 22 and 45 to 47 are built in (ECMA-376 part 1, 18.8.30)
 * @param code the format's own code; left out for a built-in one
 */
export function formatShows(id: number, code?: string): Shows {
  if (code === undefined)
    return id >= 14 && id <= 17 ? 'date' : (id >= 18 && id <= 22) || (id >= 45 && id <= 47) ? 'clock' : null;
  // Only the part for positive numbers; text in quotes, escaped signs, fills and colours are no letters of the format.
  const letters = code
    .split(';')[0]
    .replace(/"[^"]*"|\\.|_.|\*./g, '')
    .replace(/\[(?!h+\]|m+\]|s+\])[^\]]*\]/gi, '');
  if (/general/i.test(letters)) return null;
  if (/[hs]/i.test(letters)) return 'clock';
  return /[dmy]/i.test(letters) ? 'date' : null;
}

const two = (value: number) => String(value).padStart(2, '0');
/** Serial number of 1970-01-01 in each of the two epochs. */
const unixEpoch = { 1900: 25_569, 1904: 24_107 };

/**
 * A serial number as the sheet shows it, to the second: "2026-03-04 10:30:00". It has no zone: it is what the clock on the wall showed.
 * A time without a date is "10:30:00"; a whole day under a format that shows no time of day is "2026-03-04".
 */
export function serialText(serial: number, epoch: 1900 | 1904, shows: 'date' | 'clock'): string {
  const seconds = Math.round(serial * 86_400);
  if (seconds < 86_400) return clockOf(Math.max(0, seconds));
  // 29 February 1900, which never was, has a serial number of its own; days before it count one more.
  const days = Math.floor(seconds / 86_400) + (epoch === 1900 && serial < 60 ? 1 : 0) - unixEpoch[epoch];
  const date = new Date(days * 86_400_000);
  if (Number.isNaN(date.getTime())) return String(serial);
  const day = `${String(date.getUTCFullYear())}-${two(date.getUTCMonth() + 1)}-${two(date.getUTCDate())}`;
  return shows === 'date' && seconds % 86_400 === 0 ? day : `${day} ${clockOf(seconds % 86_400)}`;
}

function clockOf(seconds: number): string {
  return `${two(Math.floor(seconds / 3600))}:${two(Math.floor(seconds / 60) % 60)}:${two(seconds % 60)}`;
}
