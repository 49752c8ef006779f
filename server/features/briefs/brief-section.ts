import type { ArrivalModel } from '../../../shared/forecasting/arrival-model.ts';
import type { CalendarDay, ExposureGap } from '../../../shared/forecasting/visit-table.ts';
import type { WeekFacts } from '../../../shared/forecasting/weeks-in-hindsight.ts';

/** Everything about one site that its section is written from, gathered by the server before a thread computes the rest. */
export interface SectionInput {
  site: {
    id: string;
    name: string;
    timeZone: string;
    planningRisk: number;
    smallNumberMinimum: number;
    stayCapHours: number;
    waitLimitMinutes: number | null;
  };
  areas: { id: string; name: string; spaceKind: 'bed' | 'chair' }[];
  /** Seven local days each, UTC seconds; earlier weeks lie before the last. */
  nextWeek: { from: number; to: number };
  lastWeek: { from: number; to: number };
  /** Why nothing can be forecast; null where something can. */
  refusal: string | null;
  model: { fittedAt: number | null; areaIds: string[]; drift?: string[] } | null;
  /** What the newest week outlook says of the next week; null where none is fresh. */
  outlook: OutlookPart | null;
  /** To forecast arrivals alone, where no week outlook is there. */
  arrival: { model: ArrivalModel; calendar: CalendarDay[]; seed: number } | null;
  calendar: CalendarDay[];
  /** Versions of the staffed-bed plan, ascending, by area in the order of `areas`. */
  plans: { savedAt: number; halfHours: number[][] }[];
  bedChanges: { area: number; fromAt: number; untilAt: number; beds: number }[];
  gaps: (ExposureGap & { reason: string })[];
  /** What was done in the last week. */
  done: { acknowledged: number; bedChanges: number };
  /** What changed in the last week, as sentences. */
  changes: string[];
  scores: LastWeekScores | null;
}

/** How the last week's forecasts of need did, the whole department. */
export interface LastWeekScores {
  leadHours: number;
  hours: number;
  /** Of those, inside the forecast's 90 % range. */
  inside: number;
  /** How many were to be expected there. */
  expected: number;
}

export interface Fan {
  p2_5: number;
  p10: number;
  p25: number;
  p50: number;
  p75: number;
  p90: number;
  p97_5: number;
}

/** The parts of a week outlook that a brief tells of. */
export interface OutlookPart {
  issuedAt: number;
  week: Fan;
  days: (Fan & { from: number })[];
  shifts: ShiftRisk[];
}

/** One area in one shift of the next week. */
export interface ShiftRisk {
  shift: string;
  from: number;
  areaId: string;
  counted: boolean;
  /** Chance of any shortfall during the shift. */
  chance: number;
  staffed: number;
  bedsNeeded: number;
  bedsToAdd: number;
  bedsThatDoNotExist: number;
  nurseHours: number | null;
  lastChanceAt: number;
}

/** What a thread adds to the input. */
export interface SectionFacts extends SectionInput {
  arrivals: { week: Fan; days: (Fan & { from: number; usual: number | null })[] } | null;
  /** Why arrivals are not forecast. */
  arrivalsRefusal: string | null;
  last: WeekFacts;
  fourWeeks: WeekFacts[];
  year: WeekFacts[];
}

/** Stands for each recipient's own address to unsubscribe. */
export const unsubscribeMark = '{{unsubscribe}}';

export interface ComposedBrief {
  subject: string;
  html: string;
  text: string;
  pictures: { cid: string; contentType: string; content: string }[];
}
