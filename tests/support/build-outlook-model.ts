import type { Zone } from '../../shared/domain/zoned-time.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { countHourly } from '../../shared/forecasting/count-hourly.ts';
import { fitArrivals } from '../../shared/forecasting/fit-arrivals.ts';
import { fitStays } from '../../shared/forecasting/fit-stays.ts';
import type { OutlookInput } from '../../shared/forecasting/outlook-types.ts';
import type { OutlookModel } from '../../shared/forecasting/prepare-need.ts';
import { simulateStayLog } from './simulate-stay-log.ts';

/** A zone whose clocks change, and the end of a log of 12 weeks in it. */
export const outlookZone: Zone = makeZone('America/Toronto');
export const logFrom = Date.UTC(2031, 0, 6, 5) / 1000;
export const logDays = 84;
export const logTo = logFrom + logDays * 86_400;

/** Models of two areas, fitted to a simulated log of 12 weeks; `stayShape` other than 1 makes stays not exponential. */
export function buildOutlookModel(stayShape = 1): OutlookModel {
  const { visits } = simulateStayLog({
    zone: outlookZone,
    from: logFrom,
    days: logDays,
    areas: [
      { ratePerHour: (h) => (h < 8 ? 2 : 5), shares: [0.6, 0.28, 0.05, 0.07], hazard: [0.3, 0.14, 0.2, 0.45] },
      { ratePerHour: (h) => (h < 8 ? 0.4 : 1), shares: [0.4, 0.5, 0.08, 0.02], hazard: [0.4, 0.2, 0.25, 0.5] },
    ],
    hourFactor: (h, weekend) => (h < 6 ? 0.6 : 1.2) * (weekend ? 0.85 : 1),
    outflow: [
      { variance: 0.02, correlation: 0.5 },
      { variance: 0.06, correlation: 0.6 },
    ],
    stayShape,
    seed: 5,
  });
  for (let i = 0; i < visits.length; i += 1) {
    // Bed-space and decision times at fixed shares of each stay, so that both are there to be fitted.
    const stay = visits.departureAt[i] - visits.arrivalAt[i];
    if (visits.disposition[i] !== 3) visits.bedSpaceAt[i] = visits.arrivalAt[i] + 0.2 * stay;
    if (visits.disposition[i] === 1) visits.admissionDecisionAt[i] = visits.arrivalAt[i] + 0.5 * stay;
  }
  const window = { from: logFrom, to: logTo };
  const takenAt = logTo + 10 * 86_400;
  return {
    arrival: fitArrivals({
      counts: countHourly(visits, 2, outlookZone, logFrom, logTo),
      calendar: [],
      settings: {
        profileHalfLifeWeeks: 52,
        structure: 'by day cut at 04:00, AR(1)',
        levelVariancePerDay: 1e-5,
        factorVariance: 0.003,
        factorCorrelation: 0.4,
        seasonSd: 0,
        holidayWeekday: 7,
      },
    }),
    stay: fitStays({
      visits,
      areas: 2,
      zone: outlookZone,
      window,
      facts: { selectedBy: 'arrived', takenAt, missingDeparture: 'unknown' },
    }),
    calendar: [],
  };
}

/** An outlook of 24 hours from 21:20 on the log's last evening. */
export function buildOutlookInput(more: Partial<OutlookInput> = {}): OutlookInput {
  const issuedAt = logTo - 9600;
  const first = Math.ceil(issuedAt / 3600) * 3600;
  return {
    issuedAt,
    timeZone: 'America/Toronto',
    hours: Array.from({ length: 24 }, (_, i) => first + i * 3600),
    areas: [
      {
        areaId: 'acute',
        census: { takenAt: issuedAt - 900, present: 24, waiting: 3, boarding: 5 },
        staffedBeds: [
          { at: issuedAt - 36_000, beds: 24 },
          { at: first + 9 * 3600, beds: 20 },
        ],
        spaces: 26,
        safeMinimum: 12,
        bedStep: 2,
        alertLimit: 0.25,
      },
      {
        areaId: 'resuscitation',
        census: { takenAt: issuedAt, present: 4, waiting: 0, boarding: 1 },
        staffedBeds: [{ at: issuedAt - 36_000, beds: 5 }],
        spaces: 6,
        safeMinimum: 2,
        bedStep: 1,
        alertLimit: 0.1,
      },
    ],
    undecided: { takenAt: issuedAt - 300, waiting: 3 },
    planningRisk: 0.1,
    shifts: [
      { name: 'Night', from: first - 3 * 3600, to: first + 9 * 3600 },
      { name: 'Day', from: first + 8.5 * 3600, to: first + 21 * 3600 },
    ],
    arrivalsSince: { from: issuedAt - 6 * 3600, to: issuedAt - 900, count: 36 },
    seed: 99,
    replications: 1000,
    ...more,
  };
}
