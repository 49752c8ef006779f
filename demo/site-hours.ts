import { isoWeekday, localDate } from '../shared/domain/zoned-time.ts';
import type { Zone } from '../shared/domain/zoned-time.ts';
import { makeDayFactor } from './day-factor.ts';
import { fairDate, publicHolidays } from './farrowmere-calendar.ts';
import {
  dayVariation,
  fairFactor,
  holidayFactor,
  siteProcesses,
  treatmentPace,
  wardPace,
  weekendNightAreas,
  weekendNightFactor,
  weekendWardPace,
} from './visit-process.ts';

/** What holds at a site in one UTC hour. */
export interface SiteHour {
  hourOfDay: number;
  /** Arrivals an hour, by area. */
  rates: number[];
  /** Hours of treatment done in an hour. */
  treatmentPace: number;
  /** Hours of boarding done in an hour. */
  wardPace: number;
}

// The day of a factor runs from 04:00, so that a night is one piece.
const dayCut = 4 * 3600;
const purpose = { arrivals: 1, area: 2, treatment: 3, wards: 4, level: 5 };

/**
 * The state of a site by UTC hour (hours since 1970), a function of seed, site and hour alone.
 * Cost: a few µs for an hour not asked before.
 */
export function makeSiteHours(siteId: string, zone: Zone, seed: number): (utcHour: number) => SiteHour {
  const process = siteProcesses[siteId] as (typeof siteProcesses)[string] | undefined;
  if (!process) throw new RangeError(`no visit process for site ${JSON.stringify(siteId)}`);
  const { streamKey, areas } = process;
  const site = (kind: number, ...rest: number[]) => [streamKey, kind, ...rest];
  const arrivals = makeDayFactor({ seed, path: site(purpose.arrivals), ...dayVariation.arrivals });
  const byArea = areas.map((area, index) =>
    makeDayFactor({ seed, path: site(purpose.area, index), sd: area.daySd, carry: dayVariation.area.carry }),
  );
  const treatment = makeDayFactor({ seed, path: site(purpose.treatment), ...dayVariation.treatment });
  const wards = makeDayFactor({ seed, path: site(purpose.wards), ...dayVariation.wards });
  const weekly = makeDayFactor({ seed, path: site(purpose.level), ...dayVariation.level });
  const shapeSums = areas.map((area) => area.byHour.reduce((sum, weight) => sum + weight, 0));
  const cache = new Map<number, SiteHour>();

  function level(localSeconds: number): number {
    const weeks = localSeconds / (7 * 86_400);
    const week = Math.floor(weeks);
    const part = weeks - week;
    return (1 - part) * weekly(week) + part * weekly(week + 1);
  }

  function compute(utcHour: number): SiteHour {
    const local = zone.toLocal(utcHour * 3600);
    const hourOfDay = Math.floor((((local % 86_400) + 86_400) % 86_400) / 3600);
    const day = Math.floor((local - dayCut) / 86_400);
    const date = localDate(local);
    const year = Number(date.slice(0, 4));
    const holiday = publicHolidays(year).has(date);
    const weekday = holiday ? 7 : isoWeekday(local);
    // From noon of the fair's day to 02:00 of the next.
    const fairDay = localDate(local - 2 * 3600) === fairDate(year) && (hourOfDay >= 12 || hourOfDay < 2);
    const evening = isoWeekday(local - dayCut);
    const partyNight = (evening === 5 || evening === 6) && (hourOfDay >= 21 || hourOfDay < 4);
    const phase = (2 * Math.PI * (local / 86_400 - 15)) / 365.2425;
    const common =
      arrivals(day) * level(local) * (holiday ? holidayFactor(date) : 1) * (fairDay ? fairFactor[siteId] : 1);
    return {
      hourOfDay,
      rates: areas.map((area, index) => {
        const night = partyNight && weekendNightAreas.includes(area.areaId) ? weekendNightFactor : 1;
        const season = 1 + area.winter * Math.cos(phase);
        const shape = area.byHour[hourOfDay] / shapeSums[index];
        return area.arrivalsPerDay * shape * area.byWeekday[weekday - 1] * season * night * common * byArea[index](day);
      }),
      treatmentPace: treatmentPace[hourOfDay] * treatment(day),
      wardPace: wardPace[hourOfDay] * wards(day) * (weekday >= 6 ? weekendWardPace : 1),
    };
  }

  return (utcHour) => {
    let found = cache.get(utcHour);
    if (!found) {
      found = compute(utcHour);
      cache.set(utcHour, found);
    }
    return found;
  };
}
