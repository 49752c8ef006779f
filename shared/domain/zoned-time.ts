/**
 * Local time of a site. This is the only module that knows zones; everything else works in UTC
 * seconds and in the local labels made here.
 *
 * A **local hour** is the number floor(localSeconds / 3600), where localSeconds is what a clock on
 * the wall shows, counted from 1970-01-01 00:00 on that clock. It never depends on the offset, so a
 * clock change makes one local hour last two real hours (autumn) or none at all (spring), and a
 * half-hour change (Lord Howe) makes one last 1.5 or 0.5.
 */
export interface Zone {
  readonly name: string;
  /** Seconds to add to UTC seconds to get local seconds. */
  offsetAt(utcSeconds: number): number;
  /** What the clock on the wall shows, in seconds from 1970-01-01 00:00 on that clock. */
  toLocal(utcSeconds: number): number;
  /** All instants at which the wall clock shows this: none (skipped), one, or two (repeated), ascending. */
  fromLocal(localSeconds: number): number[];
  /** Clock changes in (from, to], ascending: the instant and the offset after it. */
  changesBetween(fromUtc: number, toUtc: number): { at: number; offset: number }[];
}

const quarterHour = 900;
const scanStep = 7 * 86_400;

/** Zones made so far: a formatter costs as much as a page's other figures together. */
const known = new Map<string, Zone>();

/**
 * The zone of an IANA name. Throws a RangeError naming an unknown zone. Cost: one Intl formatter the first time; offsets are
 * cached by week.
 */
export function makeZone(name: string): Zone {
  let zone = known.get(name);
  if (!zone) known.set(name, (zone = newZone(name)));
  return zone;
}

function newZone(name: string): Zone {
  let format: Intl.DateTimeFormat;
  try {
    format = new Intl.DateTimeFormat('en-US', {
      timeZone: name,
      hourCycle: 'h23',
      era: 'short',
      year: 'numeric',
      month: 'numeric',
      day: 'numeric',
      hour: 'numeric',
      minute: 'numeric',
      second: 'numeric',
    });
  } catch {
    throw new RangeError(`unknown time zone ${JSON.stringify(name)}`);
  }

  function readOffset(utcSeconds: number): number {
    const part: Record<string, string> = {};
    for (const { type, value } of format.formatToParts(utcSeconds * 1000)) part[type] = value;
    const local = Date.UTC(
      Number(part.year),
      Number(part.month) - 1,
      Number(part.day),
      Number(part.hour),
      Number(part.minute),
      Number(part.second),
    );
    return Math.round(local / 1000 - utcSeconds);
  }

  // One cell a week: the offset at its start, and where the offset changes inside it (rarely).
  const cells = new Map<number, { offset: number; changes: { at: number; offset: number }[] }>();
  function cellAt(index: number) {
    let cell = cells.get(index);
    if (cell) return cell;
    const start = index * scanStep;
    cell = { offset: readOffset(start), changes: [] };
    // A zone may change twice within days (Ramadan in Morocco), so look at every day of a week that may hold a change.
    let from = start;
    let before = cell.offset;
    for (let day = 1; day <= 7; day += 1) {
      const to = start + day * 86_400;
      const after = readOffset(to);
      if (after !== before) {
        let low = from;
        let high = to;
        while (high - low > quarterHour) {
          const middle = low + Math.floor((high - low) / 2 / quarterHour) * quarterHour;
          if (readOffset(middle) === before) low = middle;
          else high = middle;
        }
        // A change at the very end belongs to the next cell's start.
        if (high < start + scanStep) cell.changes.push({ at: high, offset: after });
      }
      from = to;
      before = after;
    }
    cells.set(index, cell);
    return cell;
  }

  let lastFrom = 1;
  let lastTo = 0;
  let lastOffset = 0;
  function offsetAt(utcSeconds: number): number {
    if (utcSeconds >= lastFrom && utcSeconds < lastTo) return lastOffset;
    const index = Math.floor(utcSeconds / scanStep);
    const cell = cellAt(index);
    lastFrom = index * scanStep;
    lastTo = lastFrom + scanStep;
    lastOffset = cell.offset;
    for (const change of cell.changes) {
      if (utcSeconds >= change.at) {
        lastFrom = change.at;
        lastOffset = change.offset;
      } else {
        lastTo = change.at;
        break;
      }
    }
    return lastOffset;
  }

  return {
    name,
    offsetAt,
    toLocal: (utcSeconds) => utcSeconds + offsetAt(utcSeconds),
    fromLocal(localSeconds) {
      const found: number[] = [];
      for (const guess of new Set([offsetAt(localSeconds - 86_400), offsetAt(localSeconds + 86_400)])) {
        const utc = localSeconds - guess;
        if (offsetAt(utc) === guess) found.push(utc);
      }
      return found.sort((a, b) => a - b);
    },
    changesBetween(fromUtc, toUtc) {
      const found: { at: number; offset: number }[] = [];
      for (let index = Math.floor(fromUtc / scanStep); index * scanStep <= toUtc; index += 1) {
        const cell = cellAt(index);
        const before = cellAt(index - 1);
        const last = before.changes.at(-1)?.offset ?? before.offset;
        if (cell.offset !== last) found.push({ at: index * scanStep, offset: cell.offset });
        found.push(...cell.changes);
      }
      return found.filter((change) => change.at > fromUtc && change.at <= toUtc);
    },
  };
}

/** Local date and time of day from local seconds. `weekday` is ISO: 1 Monday .. 7 Sunday. */
export interface LocalParts {
  year: number;
  month: number;
  day: number;
  hour: number;
  minute: number;
  weekday: number;
}

/** Splits local seconds into date and time. */
export function localParts(localSeconds: number): LocalParts {
  const date = new Date(localSeconds * 1000);
  return {
    year: date.getUTCFullYear(),
    month: date.getUTCMonth() + 1,
    day: date.getUTCDate(),
    hour: date.getUTCHours(),
    minute: date.getUTCMinutes(),
    weekday: isoWeekday(localSeconds),
  };
}

/** ISO weekday (1 Monday .. 7 Sunday) of local seconds; 1970-01-01 was a Thursday. */
export function isoWeekday(localSeconds: number): number {
  const day = Math.floor(localSeconds / 86_400);
  return ((((day + 3) % 7) + 7) % 7) + 1;
}

/** The local date as YYYY-MM-DD. */
export function localDate(localSeconds: number): string {
  return new Date(localSeconds * 1000).toISOString().slice(0, 10);
}

/** Local seconds of a date at a minute of its day. Throws a RangeError on what is not a date. */
export function localSecondsOf(date: string, minuteOfDay = 0): number {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(date);
  const at = match ? Date.UTC(Number(match[1]), Number(match[2]) - 1, Number(match[3])) / 1000 : NaN;
  if (!match || localDate(at) !== date) throw new RangeError(`not a date: ${JSON.stringify(date)}`);
  return at + minuteOfDay * 60;
}
