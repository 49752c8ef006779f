import type { WeekAhead, WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import type { CareArea, Site } from '../../../shared/api/sites.ts';
import type { FanColumn, FanHour } from '../../../shared/charts/ArrivalFan.tsx';
import { skyTone } from '../../../shared/charts/daylight.ts';
import type { NeedColumn } from '../../../shared/charts/need-columns.ts';
import { shiftInCharge } from '../../../shared/domain/shift-times.ts';
import { localDate } from '../../../shared/domain/zoned-time.ts';
import { formatDay, formatNumber, zoneOf } from '../../lib/format.ts';

/** One column of the board: a shift. It owns the time until the next one begins. */
export interface WeekColumn {
  name: string;
  from: number;
  to: number;
  ownedTo: number;
  /** Local date on which it begins. */
  date: string;
  /** The day's name where a new day begins. */
  day: string | null;
  sky: 1 | 2 | 3 | 4;
  /** "Night, Sat 5 Dec". */
  fullName: string;
}

export interface WeekArea {
  area: CareArea;
  counted: boolean;
  columns: NeedColumn[];
  /** One a shift ahead. */
  shifts: WeekOutlook['result']['areas'][number]['shifts'];
}

export interface WeekBoard {
  past: WeekColumn[];
  ahead: WeekColumn[];
  /** Place of each shift ahead in the outlook's list. */
  places: number[];
  areas: WeekArea[];
  department: { columns: NeedColumn[]; shifts: WeekOutlook['result']['department']['shifts'] };
  fan: FanColumn[];
  /** End of what is shown, UTC seconds. */
  until: number;
}

type Peak = WeekArea['shifts'][number]['peak'];

const forecastColumn = (at: number, staffed: number, peak: Peak): NeedColumn => ({
  kind: 'forecast',
  at,
  staffed,
  p5: peak.p5,
  p25: peak.p25,
  p50: peak.p50,
  p75: peak.p75,
  p90: peak.p90,
  p95: peak.p95,
});

/** Everything that the board draws: three shifts past, the one under way and those that begin within the days asked for. */
export function buildWeekBoard(week: WeekAhead, outlook: WeekOutlook, site: Site, days: number): WeekBoard {
  const { result } = outlook;
  const zone = zoneOf(site.timeZone);
  const until = result.days[Math.min(days, result.days.length - 1)].to;
  const current = shiftInCharge(result.shifts, week.now);
  const begin = current?.from ?? week.now;
  const places = result.shifts.flatMap((shift, s) => (shift.from >= begin && shift.from < until ? [s] : []));
  const shown = places.map((s) => result.shifts[s]);
  const all = [...week.past, ...shown];
  const columns = all.map((shift, index): WeekColumn => {
    const date = localDate(zone.toLocal(shift.from));
    const before = index > 0 ? localDate(zone.toLocal(all[index - 1].from)) : null;
    return {
      name: shift.name,
      from: shift.from,
      to: shift.to,
      ownedTo: all.at(index + 1)?.from ?? shift.to,
      date,
      day: date === before || index === 0 ? null : formatDay(shift.from, site.timeZone, 'short'),
      sky: skyTone(zone, Math.floor((shift.from + shift.to) / 2)),
      fullName: `${shift.name}, ${formatDay(shift.from, site.timeZone, 'short')}`,
    };
  });
  const past = columns.slice(0, week.past.length);
  const ahead = columns.slice(week.past.length);

  const areas = site.areas.flatMap((area): WeekArea[] => {
    const own = result.areas.find(({ areaId }) => areaId === area.id);
    if (!own) return [];
    const before = week.past.map((shift): NeedColumn => {
      const found = shift.areas.find(({ areaId }) => areaId === area.id);
      return { kind: 'past', at: shift.from, staffed: found?.staffed ?? 0, present: found?.most ?? null };
    });
    const shifts = places.map((s) => own.shifts[s]);
    const after = shifts.map(({ staffedLeast, peak }, index) => forecastColumn(ahead[index].from, staffedLeast, peak));
    return [{ area, counted: own.counted, columns: [...before, ...after], shifts }];
  });

  const pooled = places.map((s) => result.department.shifts[s]);
  const pooledBefore = week.past.map((shift): NeedColumn => {
    const staffed = shift.areas.reduce((sum, found) => sum + found.staffed, 0);
    return { kind: 'past', at: shift.from, staffed, present: shift.most };
  });
  return {
    past,
    ahead,
    places,
    areas,
    department: {
      columns: [
        ...pooledBefore,
        ...pooled.map(({ staffedLeast, peak }, index) => forecastColumn(ahead[index].from, staffedLeast, peak)),
      ],
      shifts: pooled,
    },
    fan: fanColumns(week, outlook, columns),
    until,
  };
}

/** Hours of every column with what is forecast for them and what came; a day's figures where the day begins. */
function fanColumns(week: WeekAhead, outlook: WeekOutlook, columns: readonly WeekColumn[]): FanColumn[] {
  const { hours, days } = outlook.result.arrivals;
  const hoursOf = new Map<number, FanHour>();
  for (const { from, count } of week.actual) hoursOf.set(from, { from, forecast: null, actual: count });
  hours.spans.forEach(({ from }, h) => {
    const { p2_5, p10, p25, p75, p90, p97_5 } = hours.total;
    const forecast = { p2_5: p2_5[h], p10: p10[h], p25: p25[h], p75: p75[h], p90: p90[h], p97_5: p97_5[h] };
    hoursOf.set(from, { from, forecast, actual: hoursOf.get(from)?.actual ?? null });
  });
  const sorted = [...hoursOf.values()].sort((a, b) => a.from - b.from);
  return columns.map((column, index) => {
    const place = column.day === null ? -1 : days.spans.findIndex(({ name }) => name === column.date);
    const length = columns.slice(index).filter(({ date }) => date === column.date).length;
    return {
      from: column.from,
      hours: sorted.filter(({ from }) => from >= column.from && from < column.ownedTo),
      day:
        place < 1
          ? null
          : {
              middle: formatNumber(days.total.p50[place]),
              range: `${formatNumber(days.total.p2_5[place])} to ${formatNumber(days.total.p97_5[place])}`,
              columns: length,
            },
    };
  });
}

/** Staffed beds as steps, one a column. */
export function stepsOf(columns: readonly NeedColumn[]): { at: number; beds: number }[] {
  return columns.map(({ at, staffed }) => ({ at, beds: staffed }));
}

/** "Sat 5 Dec Night". */
export function shiftName(shift: { name: string; from: number }, timeZone: string): string {
  return `${formatDay(shift.from, timeZone, 'short')} ${shift.name}`;
}
