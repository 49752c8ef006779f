import type { Census } from '../../../../shared/api/censuses.ts';
import type { Outlook, Tonight } from '../../../../shared/api/outlooks.ts';
import type { CareArea, Site } from '../../../../shared/api/sites.ts';

/** Tuesday 1 December 2026, 19:02 in London. */
export const now = Date.UTC(2026, 11, 1, 19, 2) / 1000;
const at = (hour: number) => Date.UTC(2026, 11, 1, hour) / 1000;
export const hours = Array.from({ length: 14 }, (_, index) => at(20 + index));

export function buildArea(change: Partial<CareArea> = {}): CareArea {
  return {
    id: 'acute',
    name: 'Acute',
    spaceKind: 'bed',
    spaces: 24,
    safeMinimum: 12,
    bedStep: 1,
    noticeHours: 2,
    alertLimit: 0.25,
    escalationNote: 'Call the site manager.',
    bedsPerNurse: null,
    lendsTo: [],
    ...change,
  };
}

export function buildSite(
  areas: CareArea[] = [buildArea(), buildArea({ id: 'obs', name: 'Observation', spaces: 6 })],
): Site {
  return {
    id: 'general',
    name: 'Farrowmere General',
    groupName: 'Farrowmere',
    timeZone: 'Europe/London',
    country: 'GB',
    region: null,
    planningRisk: 0.1,
    bedMeetingMinutes: [600, 960],
    waitLimitMinutes: null,
    areas,
    shifts: [
      { id: 'late', name: 'Late', startMinute: 840, endMinute: 1290, leadTimeHours: 48 },
      { id: 'night', name: 'Night', startMinute: 1260, endMinute: 450, leadTimeHours: 72 },
    ],
  };
}

const percentiles = (p50: number) => {
  const same = (value: number) => hours.map(() => value);
  return {
    p5: same(p50 - 4),
    p10: same(p50 - 3),
    p25: same(p50 - 1),
    p50: same(p50),
    p75: same(p50 + 2),
    p90: same(p50 + 4),
    p95: same(p50 + 6),
    mean: same(p50),
  };
};

type Area = Outlook['result']['areas'][number];

export function buildAreaOutlook(areaId: string, chances: readonly number[], change: Partial<Area> = {}): Area {
  const cells = hours.map((_, index) => ({ chance: chances[index] ?? 0.01, se: 0.004 }));
  const beds = hours.map((_, index) => ((chances[index] ?? 0) > 0.25 ? 3 : 0));
  const chance = { chance: 0.71, se: 0.004 };
  const shift = (name: string, from: number, to: number) => ({
    name,
    from,
    to,
    someTime: chance,
    bedsForPlanningRisk: 24,
    bedsForAlertLimit: 22,
    bedsToStaff: 24,
    bedsThatDoNotExist: 0,
    someTimeWithEverySpace: chance,
  });
  return {
    areaId,
    counted: true,
    need: percentiles(18),
    staffed: hours.map(() => 20),
    shortfall: cells,
    shortfallWithin: cells.map((cell) => ({ chance: Math.min(1, cell.chance * 2), se: cell.se })),
    shortfallWithEverySpace: cells,
    headroom: hours.map(() => -2),
    bedsNeeded: hours.map(() => 22),
    shifts: [shift('Late', at(14), at(21) + 1800), shift('Night', at(21), at(31) + 1800)],
    firstHourPastLimit: 1,
    bedsToAdd: beds,
    bedsThatDoNotExist: hours.map(() => 0),
    smallestChange: null,
    boardingOut: null,
    admittedLeaving: percentiles(4),
    arrivalsToAdmit: percentiles(4),
    bedHoursShort: { mean: 2, p90: 5 },
    peak: { p50: 20, p90: 24, p95: 26 },
    ...change,
  };
}

export function buildTonight(change: Partial<Tonight> = {}, areas?: Area[]): Tonight {
  const outlooks = areas ?? [buildAreaOutlook('acute', [0.1, 0.64, 0.57, 0.3]), buildAreaOutlook('obs', [0.02])];
  const chances = hours.map(() => ({ chance: 0.4, se: 0.004 }));
  return {
    now,
    computing: false,
    missing: null,
    moved: null,
    cautions: [],
    acknowledgements: [],
    lastNight: null,
    past: [
      {
        at: at(18),
        areas: outlooks.map(({ areaId }) => ({ areaId, present: 21, staffed: 22, source: 'census' as const })),
      },
      { at: at(19), areas: outlooks.map(({ areaId }) => ({ areaId, present: null, staffed: 22, source: null })) },
    ],
    outlook: {
      id: 'outlook-1',
      issuedAt: now - 1200,
      trigger: 'census saved',
      census: outlooks.map(({ areaId }) => ({ areaId, takenAt: now - 1320, present: 22, waiting: 3, boarding: 6 })),
      undecided: null,
      staffedBeds: outlooks.map(({ areaId }) => ({
        areaId,
        steps: [
          { at: now - 1200, beds: 24 },
          { at: at(21), beds: 20 },
        ],
      })),
      model: { id: 'm1', fittedAt: now - 950_400, approvedAt: null, trainedTo: now - 950_400, weeksOfHistory: 78 },
      planningRisk: 0.1,
      seed: 1,
      softwareVersion: '0.1.0',
      computeMilliseconds: 300,
      result: {
        engineVersion: '1',
        hours,
        areas: outlooks,
        pooled: outlooks[0],
        someAreaShort: chances,
        someAreaShortByShift: chances.slice(0, 2),
        arrivalsSoFar: null,
        lengthOfStay: 'exponential',
        replications: 10_000,
      },
    },
    ...change,
  };
}

export function buildCensus(waiting = 3): Census {
  return {
    areas: ['acute', 'obs'].map((areaId) => ({
      areaId,
      takenAt: now - 1320,
      present: 22,
      waiting,
      boarding: 6,
      enteredBy: 'A. Brandt',
    })),
    undecided: null,
    arrivalsSinceMidnight: null,
  };
}
