import { canonicalCountHeader } from '../../shared/domain/canonical-count.ts';
import { localDate, makeZone } from '../../shared/domain/zoned-time.ts';

/** One row of hourly counts as a test writes it. */
export function countLine(row: {
  area?: string;
  date: string;
  hour: number | string;
  arrivals?: number | string;
  departures?: number | string;
}): string {
  const { area = 'Acute', date, hour, arrivals = 3, departures = '' } = row;
  return [area, date, String(hour), String(arrivals), String(departures)].join(',');
}

/**
 * Hourly counts of visits, every hour of every area from the first to the last, as a site's own system would add them up.
 * @param visits arrivals and departures, UTC seconds
 */
export function buildCountCsv(
  visits: readonly { areaId: string; arrivalAt: number; departureAt: number | null }[],
  {
    from,
    to,
    areas,
    timeZone,
    departures,
  }: {
    from: number;
    to: number;
    areas: readonly { id: string; name: string }[];
    timeZone: string;
    departures: boolean;
  },
): string {
  const zone = makeZone(timeZone);
  const labelOf = (at: number) => Math.floor(zone.toLocal(at) / 3600);
  const came = new Map<string, number>();
  const left = new Map<string, number>();
  const add = (into: Map<string, number>, areaId: string, at: number) => {
    const key = `${areaId} ${String(labelOf(at))}`;
    into.set(key, (into.get(key) ?? 0) + 1);
  };
  for (const { areaId, arrivalAt, departureAt } of visits) {
    if (arrivalAt >= from && arrivalAt < to) add(came, areaId, arrivalAt);
    if (departureAt !== null && departureAt >= from && departureAt < to) add(left, areaId, departureAt);
  }
  const lines = [canonicalCountHeader];
  for (const { id, name } of areas) {
    for (let label = labelOf(from); label <= labelOf(to - 1); label += 1) {
      if (zone.fromLocal(label * 3600).length === 0) continue;
      const key = `${id} ${String(label)}`;
      lines.push(
        countLine({
          area: name,
          date: localDate(label * 3600),
          hour: ((label % 24) + 24) % 24,
          arrivals: came.get(key) ?? 0,
          departures: departures ? (left.get(key) ?? 0) : '',
        }),
      );
    }
  }
  return `${lines.join('\n')}\n`;
}
