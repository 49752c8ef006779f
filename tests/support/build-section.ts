import type { SectionFacts, ShiftRisk } from '../../server/features/briefs/brief-section.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import type { WeekFacts } from '../../shared/forecasting/weeks-in-hindsight.ts';
import { weeksAround } from '../../server/features/briefs/add-hindsight.ts';

const day = 86_400;
const hour = 3600;
/** Tuesday 2026-12-01 07:00 in London. */
export const briefNow = Date.UTC(2026, 11, 1, 7) / 1000;

function fan(middle: number) {
  const at = (share: number) => Math.round(middle * share);
  return { p2_5: at(0.85), p10: at(0.9), p25: at(0.95), p50: middle, p75: at(1.05), p90: at(1.1), p97_5: at(1.15) };
}

function week(from: number, more: Partial<WeekFacts> = {}): WeekFacts {
  return {
    from,
    to: from + 7 * day,
    arrivals: 700,
    hoursShort: [30, 4],
    hoursAnyShort: 32,
    presentHours: 4000,
    boardingHours: 600,
    dispositions: [500, 150, 20, 30, 0],
    waits: { known: 690, tooLong: 40 },
    ...more,
  };
}

/** What a section of two areas is written from: a week whose nights are likely to run short in Acute. */
export function buildSection(more: Partial<SectionFacts> = {}): SectionFacts {
  const { nextWeek, lastWeek } = weeksAround(makeZone('Europe/London'), briefNow);
  const shifts = Array.from({ length: 7 }, (_, index) =>
    ['Early', 'Late', 'Night'].flatMap((shift, place): ShiftRisk[] => {
      const from = nextWeek.from + index * day + (7 + 7 * place) * hour;
      const chance = place === 2 ? 0.4 + 0.05 * index : 0.03 + 0.02 * index;
      const short = chance > 0.1;
      const risk = {
        shift,
        from,
        counted: true,
        chance,
        staffed: 20,
        bedsNeeded: short ? 24 + index : 19,
        bedsToAdd: short ? 4 + index : 0,
        bedsThatDoNotExist: index === 6 && short ? 2 : 0,
        nurseHours: short ? 8 + index : null,
        lastChanceAt: from - 72 * hour,
      };
      return [
        { ...risk, areaId: 'acute' },
        { ...risk, areaId: 'resus', chance: 0.002, bedsToAdd: 0, nurseHours: null },
      ];
    }),
  ).flat();
  return {
    site: {
      id: 'general',
      name: 'Farrowmere General',
      timeZone: 'Europe/London',
      planningRisk: 0.1,
      smallNumberMinimum: 5,
      stayCapHours: 72,
      waitLimitMinutes: 240,
    },
    areas: [
      { id: 'acute', name: 'Acute', spaceKind: 'bed' },
      { id: 'resus', name: 'Resuscitation', spaceKind: 'bed' },
    ],
    nextWeek,
    lastWeek,
    refusal: null,
    model: { fittedAt: briefNow - 11 * day, areaIds: ['acute', 'resus'] },
    outlook: { issuedAt: briefNow - hour, week: fan(700), days: [], shifts },
    arrival: null,
    calendar: [],
    plans: [{ savedAt: lastWeek.from - 90 * day, halfHours: [] }],
    bedChanges: [],
    gaps: [],
    done: { acknowledged: 3, bedChanges: 1 },
    changes: ['Version 4 of the staffed-bed plan was saved by Petra Vance.'],
    scores: { leadHours: 12, hours: 168, inside: 152, expected: 151 },
    arrivals: {
      week: fan(700),
      days: Array.from({ length: 7 }, (_, index) => ({ from: nextWeek.from + index * day, ...fan(100), usual: 98 })),
    },
    arrivalsRefusal: null,
    last: week(lastWeek.from, { arrivals: 710, dispositions: [505, 152, 21, 32, 0] }),
    fourWeeks: [28, 21, 14, 7].map((days) => week(lastWeek.from - days * day)),
    year: Array.from({ length: 52 }, (_, index) => week(lastWeek.from - (52 - index) * 7 * day)),
    ...more,
  };
}
