import type { WeekAhead, WeekOutlook } from '../../shared/api/week-outlooks.ts';
import { weekAhead } from '../../shared/api/week-outlooks.ts';

const hour = 3600;
const day = 24 * hour;

/** Tuesday 1 December 2026, 10:00 in London: the Early shift is under way. */
export const weekNow = Date.UTC(2026, 11, 1, 10) / 1000;
const midnight = Date.UTC(2026, 11, 1) / 1000;
const wholeDays = 14;

/** Early 07:00, Late 14:00, Night 21:00 of 15 days. */
export const weekShifts = Array.from({ length: wholeDays + 1 }, (_, d) =>
  [
    ['Early', 7, 14.5],
    ['Late', 14, 21.5],
    ['Night', 21, 31.5],
  ].map(([name, from, to]) => ({
    name: String(name),
    from: midnight + d * day + Number(from) * hour,
    to: midnight + d * day + Number(to) * hour,
  })),
).flat();

type Columns = WeekOutlook['result']['arrivals']['days']['total'];
type ShiftNeed = WeekOutlook['result']['areas'][number]['shifts'][number];

function columns(middles: readonly number[]): Columns {
  const plus = (by: number) => middles.map((middle) => Math.max(0, middle + by));
  return {
    mean: [...middles],
    p2_5: plus(-4),
    p10: plus(-3),
    p25: plus(-1),
    p50: [...middles],
    p75: plus(1),
    p90: plus(3),
    p97_5: plus(5),
  };
}

const needColumns = (middles: readonly number[]) => ({
  ...columns(middles),
  p5: middles.map((middle) => Math.max(0, middle - 3.5)),
  p95: middles.map((middle) => middle + 4),
});

const peakAt = (middle: number): ShiftNeed['peak'] => ({
  mean: middle,
  p2_5: middle - 4,
  p5: middle - 3,
  p10: middle - 3,
  p25: middle - 1,
  p50: middle,
  p75: middle + 1,
  p90: middle + 3,
  p95: middle + 4,
  p97_5: middle + 5,
});

/** A shift whose plan does: 20 planned, 17 needed at P90; with a day's notice to book. */
export function buildShiftNeed(from: number, more: Partial<ShiftNeed> = {}): ShiftNeed {
  return {
    peak: peakAt(14),
    staffedLeast: 20,
    staffedMost: 20,
    someTime: 0.03,
    headroom: 3,
    bedsForPlanningRisk: 17,
    bedsToStaff: 18,
    bedsToAdd: 0,
    bedsThatDoNotExist: 0,
    someTimeWithEverySpace: 0.01,
    nurseHours: null,
    lastChanceAt: from - day,
    ...more,
  };
}

/** A gap of one shift: so many beds to add, at a chance. */
export const gapOf = (bedsToAdd: number, someTime: number, more: Partial<ShiftNeed> = {}): Partial<ShiftNeed> => ({
  bedsToAdd,
  someTime,
  headroom: 3 - bedsToAdd,
  ...more,
});

/**
 * What the page shows of a site with Acute and Observation. @param gaps by area id and place of the shift in `weekShifts`
 */
export function buildWeek(
  gaps: Record<string, Record<number, Partial<ShiftNeed>>> = {},
  more: Partial<WeekAhead> = {},
): WeekAhead & { outlook: WeekOutlook } {
  const days = Array.from({ length: wholeDays + 1 }, (_, d) => ({
    name: new Date((midnight + d * day) * 1000).toISOString().slice(0, 10),
    from: d === 0 ? weekNow : midnight + d * day,
    to: midnight + (d + 1) * day,
  }));
  const hours = Array.from({ length: 365 }, (_, h) => weekNow + (h + 1) * hour);
  const hourSpans = hours.map((to) => ({ name: '', from: to - hour, to }));
  const needs = (middle: number) => ({
    need: needColumns(hours.map(() => middle)),
    staffed: hours.map(() => 20),
    shortfall: hours.map(() => 0.02),
    shortfallWithin: hours.map(() => 0.03),
  });
  const table = (spans: { name: string; from: number; to: number }[], each: (index: number) => number) => ({
    spans,
    total: columns(spans.map((_, index) => each(index))),
    areas: [columns(spans.map((_, index) => each(index) - 30)), columns(spans.map(() => 30))],
    ambulance: columns(spans.map((_, index) => Math.round(each(index) / 3))),
  });
  const admissions = {
    admittedLeaving: columns(days.map((_, d) => 40 + d)),
    arrivalsToAdmit: columns(days.map((_, d) => 42 + d)),
  };
  const areas = ['acute', 'obs'].map((areaId) => ({
    areaId,
    counted: true,
    ...needs(14),
    shifts: weekShifts.map((shift, s) => buildShiftNeed(shift.from, gaps[areaId]?.[s])),
    admissions,
  }));
  const week = {
    now: weekNow,
    outlook: {
      id: 'week-1',
      issuedAt: weekNow - 5 * hour,
      trigger: 'daily',
      planVersion: 3,
      model: { id: 'model-1', fittedAt: weekNow - 11 * day, trainedTo: weekNow - 11 * day, weeksOfHistory: 61 },
      seed: 7,
      softwareVersion: '0.1.0',
      computeMilliseconds: 4000,
      result: {
        engineVersion: '3',
        replications: 4000,
        planningRisk: 0.1,
        hours,
        shifts: weekShifts,
        days,
        arrivals: {
          hours: table(hourSpans, () => 8),
          shifts: table(weekShifts.slice(1), () => 60),
          days: table(days, (d) => 180 + d),
          weeks: table([{ name: '7 days', from: days[1].from, to: days[7].to }], () => 1300),
        },
        areas,
        department: {
          pooled: needs(28),
          someAreaShort: hours.map(() => 0.04),
          shifts: weekShifts.map((_, s) => ({
            peak: peakAt(28),
            staffedLeast: 40,
            staffedMost: 40,
            someAreaShort: Math.max(...areas.map((area) => area.shifts[s].someTime)),
            pooledShort: 0.01,
          })),
          admissions,
        },
        calendar: [
          {
            date: '2026-12-05',
            name: 'Lantern fair',
            kind: 'local event',
            from: midnight + 4 * day,
            to: midnight + 5 * day,
            effect: 1.12,
            low: 1.04,
            high: 1.21,
            basis: 'stated',
            pastDays: 0,
          },
        ],
        ordinaryWeek: [Array.from({ length: 168 }, (_, h) => 2 + (h % 24) / 4), Array.from({ length: 168 }, () => 1)],
        lengthOfStay: 'empirical',
      },
    },
    computing: false,
    missing: null,
    cautions: [
      {
        kind: 'unusual day',
        text: 'Lantern fair on 2026-12-05: unlike any day in the log, its range is the one your site stated.',
      },
    ],
    plan: { version: 3, savedAt: weekNow - day, savedBy: 'Tomas Okoro-Lind' },
    past: [],
    actual: [],
    lastWeek: null,
    ...more,
  };
  const parsed = weekAhead.parse(week);
  if (!parsed.outlook) throw new Error('a built week has an outlook');
  return { ...parsed, outlook: parsed.outlook };
}
