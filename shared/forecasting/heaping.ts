import type { Zone } from '../domain/zoned-time.ts';
import type { Heaping } from './stay-model.ts';
import type { VisitTable } from './visit-table.ts';

const minutesOfDay = 1440;

function minutesOf(times: Float64Array, length: number, zone: Zone): { counts: Float64Array; total: number } {
  const counts = new Float64Array(minutesOfDay);
  let total = 0;
  for (let i = 0; i < length; i += 1) {
    if (!Number.isFinite(times[i])) continue;
    const minute = Math.floor(zone.toLocal(times[i]) / 60) % minutesOfDay;
    counts[(minute + minutesOfDay) % minutesOfDay] += 1;
    total += 1;
  }
  return { counts, total };
}

function onTheHour(counts: Float64Array, total: number): number {
  let sum = 0;
  for (let minute = 0; minute < minutesOfDay; minute += 60) sum += counts[minute];
  return total > 0 ? sum / total : 0;
}

/**
 * Times that fall on the same minute more often than their neighbours: typed at :00, closed by the system at 23:59 or
 * at a shift's end. Shares of all times, beside the mean share of the ten minutes on either side. Cost: linear in visits.
 */
export function reportHeaping(visits: VisitTable, zone: Zone): Heaping {
  const arrivals = minutesOf(visits.arrivalAt, visits.length, zone);
  const departures = minutesOf(visits.departureAt, visits.length, zone);
  const { counts, total } = departures;
  const neighbours = Float64Array.from(counts, (_, minute) => {
    let sum = 0;
    for (let away = 1; away <= 10; away += 1) {
      sum += counts[(minute + away) % minutesOfDay] + counts[(minute - away + minutesOfDay) % minutesOfDay];
    }
    return sum / 20;
  });
  const strongest = Array.from(counts, (count, minute) => ({ minute, excess: count - neighbours[minute] }))
    // Four standard deviations of a Poisson count: fewer than one minute in ten days of minutes by chance.
    .filter(({ minute, excess }) => excess > 4 * Math.sqrt(neighbours[minute] + 1))
    .sort((a, b) => b.excess - a.excess || a.minute - b.minute)
    .slice(0, 5)
    .map(({ minute }) => ({
      minuteOfDay: minute,
      share: counts[minute] / total,
      neighbours: neighbours[minute] / total,
    }));
  return {
    arrivalsOnTheHour: onTheHour(arrivals.counts, arrivals.total),
    departuresOnTheHour: onTheHour(counts, total),
    expectedOnTheHour: 1 / 60,
    departuresAt2359: total > 0 ? counts[1439] / total : 0,
    expectedAt2359: total > 0 ? neighbours[1439] / total : 0,
    strongest,
  };
}
