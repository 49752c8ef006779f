import { createReadStream } from 'node:fs';
import Papa from 'papaparse';
import { exposureByLocalHour } from '../../shared/domain/hour-of-week.ts';
import { localSecondsOf, type Zone } from '../../shared/domain/zoned-time.ts';
import type { HourlyCounts } from '../../shared/forecasting/arrival-model.ts';

export interface HourlyFile {
  counts: HourlyCounts;
  cautions: string[];
}

const columns = ['local_date', 'hour', 'arrivals'] as const;
const mostFaults = 10;

/**
 * Reads hourly arrivals by local clock time (columns local_date, hour, arrivals). Exposure comes from the zone: the
 * skipped hour of spring has none and the repeated one of autumn two. An hour without a row is a gap, not a zero.
 * Throws a RangeError listing the faults by line, at most ten.
 */
export async function readHourlyCsv(file: string, zone: Zone): Promise<HourlyFile> {
  const faults: string[] = [];
  const arrivalsAt = new Map<number, number>();
  let line = 1;
  let missing: string[] = [];
  await new Promise<void>((resolve, reject) => {
    Papa.parse<Record<string, string>>(createReadStream(file), {
      header: true,
      skipEmptyLines: true,
      step: ({ data, meta }) => {
        if (line === 1) missing = columns.filter((column) => !meta.fields?.includes(column));
        line += 1;
        if (missing.length > 0) return;
        const fault = readRow(data, arrivalsAt);
        if (fault !== null) faults.push(`line ${String(line)}: ${fault}`);
      },
      complete: () => {
        resolve();
      },
      error: reject,
    });
  });
  if (missing.length > 0) throw new RangeError(`the file lacks the columns ${missing.join(', ')}`);
  if (faults.length > 0) {
    const more = faults.length > mostFaults ? [`and ${String(faults.length - mostFaults)} more`] : [];
    throw new RangeError([...faults.slice(0, mostFaults), ...more].join('\n'));
  }
  if (arrivalsAt.size === 0) throw new RangeError('the file has no rows');
  return toCounts(arrivalsAt, zone);
}

/** Puts a row in its place; what is wrong with it, or null. */
function readRow(row: Record<string, string>, arrivalsAt: Map<number, number>): string | null {
  const hour = Number(row.hour);
  const arrivals = Number(row.arrivals);
  if (!(/^\d{1,2}$/.test(row.hour) && hour <= 23)) return `hour ${JSON.stringify(row.hour)} is none of 0..23`;
  if (!/^\d+$/.test(row.arrivals)) return `arrivals ${JSON.stringify(row.arrivals)} is no count`;
  let localHour: number;
  try {
    localHour = localSecondsOf(row.local_date) / 3600 + hour;
  } catch {
    return `local_date ${JSON.stringify(row.local_date)} is no date YYYY-MM-DD`;
  }
  // Some systems write the repeated hour of autumn as two rows.
  arrivalsAt.set(localHour, (arrivalsAt.get(localHour) ?? 0) + arrivals);
  return null;
}

function toCounts(arrivalsAt: ReadonlyMap<number, number>, zone: Zone): HourlyFile {
  let first = Infinity;
  let last = -Infinity;
  for (const localHour of arrivalsAt.keys()) {
    first = Math.min(first, localHour);
    last = Math.max(last, localHour);
  }
  const from = Math.floor(first / 24) * 24;
  const to = Math.ceil((last + 1) / 24) * 24;
  const instant = (localHour: number): number =>
    zone.fromLocal(localHour * 3600)[0] ?? zone.fromLocal((localHour + 1) * 3600)[0];
  const real = exposureByLocalHour(zone, instant(from), instant(to));
  const exposureHours = new Float64Array(to - from);
  const arrivals = new Float64Array(to - from);
  let impossible = 0;
  let absent = 0;
  for (let i = 0; i < to - from; i += 1) {
    const exposure = real.hours[from + i - real.firstLocalHour] ?? 0;
    const counted = arrivalsAt.get(from + i);
    if (counted === undefined) {
      if (exposure > 0) absent += 1;
    } else if (exposure > 0) {
      exposureHours[i] = exposure;
      arrivals[i] = counted;
    } else impossible += counted;
  }
  const cautions: string[] = [];
  if (impossible > 0) {
    cautions.push(`${String(impossible)} arrivals lie in hours that ${zone.name} skipped: is it the right time zone?`);
  }
  if (absent > 0)
    cautions.push(`${String(absent)} hours have no row; they are taken as gaps, not as hours without arrivals.`);
  return { counts: { firstLocalHour: from, exposureHours, counts: [arrivals] }, cautions };
}
