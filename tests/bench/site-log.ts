import { calendarDays, outages } from '../../demo/farrowmere-calendar.ts';
import { demoSeed, demoSites } from '../../demo/farrowmere.ts';
import { makeVisitLog, type DemoVisit } from '../../demo/make-visit-log.ts';
import { dispositionCode } from '../../shared/domain/disposition.ts';
import { localDate, makeZone } from '../../shared/domain/zoned-time.ts';
import type { HourlyCounts } from '../../shared/forecasting/arrival-model.ts';
import type * as CountHourly from '../../shared/forecasting/count-hourly.ts';
import type * as FitArrivals from '../../shared/forecasting/fit-arrivals.ts';
import type * as FitStays from '../../shared/forecasting/fit-stays.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import type { OutlookModel } from '../../shared/forecasting/prepare-need.ts';
import type { CalendarDay, ExposureGap, VisitTable } from '../../shared/forecasting/visit-table.ts';
import { built } from './built.ts';

const hour = 3600;
const day = 86_400;

/** The site whose visits the bench takes, and its zone. */
export const site = demoSites[0];
export const zone = makeZone(site.timeZone);
/** The bench's own now: a fixed Tuesday evening, so that every run does the same work. */
export const now = Date.UTC(2026, 10, 24, 19) / 1000;

/** Visits of a site over a window, with what a fit needs to know beside them. */
export interface SiteLog {
  visits: VisitTable;
  from: number;
  calendar: CalendarDay[];
  gaps: ExposureGap[];
}

const drawn = new Map<string, DemoVisit[]>();

/** The demo site's visits of some years, drawn once a seed. */
function drawVisits(from: number, seed: number): DemoVisit[] {
  const key = `${String(from)} ${String(seed)}`;
  let rows = drawn.get(key);
  if (!rows) {
    rows = makeVisitLog({ site, from, to: now, seed });
    drawn.set(key, rows);
  }
  return rows;
}

/**
 * Visits of a site over some years, in columns. `visits` asks for so many, taken evenly from as many draws of the demo
 * site as it takes (three years of one hold about 285,000): a busier or quieter site of the same habits.
 */
export function siteLog(years: number, visits?: number): SiteLog {
  const from = Date.UTC(2026 - years, 10, 24) / 1000;
  const rows = [...drawVisits(from, demoSeed)];
  for (let more = 1; visits !== undefined && rows.length < visits; more += 1) {
    for (const row of drawVisits(from, demoSeed + more)) rows.push(row);
  }
  const place = new Map(site.areas.map((area, index) => [area.id, index]));
  const length = visits ?? rows.length;
  const pick = (index: number) => rows[Math.floor((index * rows.length) / length)];
  const column = (value: (row: DemoVisit) => number | null) =>
    Float64Array.from({ length }, (_, index) => value(pick(index)) ?? NaN);
  return {
    from,
    visits: {
      length,
      area: Uint8Array.from({ length }, (_, index) => place.get(pick(index).areaId) ?? 0),
      arrivalAt: column((row) => row.arrivalAt),
      bedSpaceAt: column((row) => row.bedSpaceAt),
      admissionDecisionAt: column((row) => row.admissionDecisionAt),
      departureAt: column((row) => row.departureAt),
      disposition: Uint8Array.from({ length }, (_, index) => {
        const { disposition } = pick(index);
        return disposition === null ? 255 : dispositionCode[disposition];
      }),
      byAmbulance: Uint8Array.from({ length }, (_, index) => (pick(index).byAmbulance ? 1 : 0)),
    },
    calendar: calendarDays(site.id, localDate(from), localDate(now + 366 * day)),
    gaps: outages(site.id, zone, from, now).map((gap) => ({ area: null, ...gap })),
  };
}

/** Counts by hour and area, as the fit of arrivals takes them. */
export async function hourlyCounts({ visits, from, gaps }: SiteLog): Promise<HourlyCounts> {
  const { countHourly } = await built<typeof CountHourly>('forecasting/count-hourly');
  return countHourly(visits, site.areas.length, zone, from, now, gaps);
}

/** Makes the whole fit of a site: arrivals and stays. */
export async function makeFit(): Promise<(log: SiteLog) => OutlookModel> {
  const { countHourly } = await built<typeof CountHourly>('forecasting/count-hourly');
  const { fitArrivals } = await built<typeof FitArrivals>('forecasting/fit-arrivals');
  const { fitStays } = await built<typeof FitStays>('forecasting/fit-stays');
  return ({ visits, from, calendar, gaps }) => {
    const counts = countHourly(visits, site.areas.length, zone, from, now, gaps);
    return {
      arrival: fitArrivals({ counts, calendar: calendar.filter((entry) => entry.date <= localDate(now)) }),
      stay: fitStays({
        visits,
        areas: site.areas.length,
        zone,
        window: { from, to: now },
        facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'still present' },
        gaps,
        calendar,
      }),
      calendar,
    };
  };
}

let fitted: Promise<OutlookModel> | null = null;
/** The demo site's models, fitted once. */
export function demoModel(): Promise<OutlookModel> {
  fitted ??= makeFit().then((fit) => fit(siteLog(1.5)));
  return fitted;
}

/** Tonight of the demo site: five areas, 36 hours, a census of twenty minutes ago. */
export function outlookInput(replications: number): OutlookInput {
  return {
    issuedAt: now,
    timeZone: site.timeZone,
    hours: Array.from({ length: 36 }, (_, index) => now + (index + 1) * hour),
    areas: site.areas.map((area, index) => ({
      areaId: area.id,
      census: {
        takenAt: now - 1200,
        present: [3, 24, 12, 6, 8][index],
        waiting: index === 1 ? 4 : 0,
        boarding: [1, 7, 0, 0, 2][index],
      },
      staffedBeds: [{ at: now, beds: site.plan[index].halfHours[38] }],
      spaces: area.spaces,
      safeMinimum: area.safeMinimum,
      bedStep: area.bedStep,
      alertLimit: area.alertLimit,
    })),
    undecided: { takenAt: now - 1200, waiting: 3 },
    planningRisk: 0.1,
    shifts: [
      { name: 'Late', from: now - 5 * hour, to: now + 2.5 * hour },
      { name: 'Night', from: now + 2 * hour, to: now + 12.5 * hour },
      { name: 'Early', from: now + 12 * hour, to: now + 19.5 * hour },
    ],
    arrivalsSince: null,
    seed: 7,
    replications,
  };
}
