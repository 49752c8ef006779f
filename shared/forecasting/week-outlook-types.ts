import type { OutlookInput } from './outlook-types.ts';
import type { ShiftWaits } from './waiting-outlook.ts';

/** A stretch of time with its name: a shift's, or a day's local date (YYYY-MM-DD); hours have none. UTC seconds. */
export interface WeekSpan {
  name: string;
  from: number;
  to: number;
}

/** A count's mean, median and 50, 80 and 95 % intervals, one figure a span each. */
export interface CountColumns {
  mean: number[];
  p2_5: number[];
  p10: number[];
  p25: number[];
  p50: number[];
  p75: number[];
  p90: number[];
  p97_5: number[];
}

/** The same with the percentiles that needs are drawn by. */
export interface NeedColumns extends CountColumns {
  p5: number[];
  p95: number[];
}

/** Arrivals by span: percentiles are of each span's own sum, never sums of percentiles. Areas are in the input's order. */
export interface ArrivalTable {
  spans: WeekSpan[];
  total: CountColumns;
  areas: CountColumns[];
  /** Arrivals by ambulance of the whole site; null where the logs do not tell them apart. */
  ambulance: CountColumns | null;
}

/** Admitted patients by local day, within one area or in all. */
export interface AdmissionColumns {
  /** Admitted patients who leave the department within the day. */
  admittedLeaving: CountColumns;
  /** Arrivals of the day that are expected to need admission. */
  arrivalsToAdmit: CountColumns;
}

/** One area by hour, aligned with `hours`; a chance's standard error is `chanceOf`'s for the result's replications. */
export interface WeekNeedByHour {
  need: NeedColumns;
  /** Staffed beds in force at each full hour. */
  staffed: number[];
  /** Chance that need exceeds staffed beds at the full hour, and at any time within the hour that ends there. */
  shortfall: number[];
  shortfallWithin: number[];
}

/** One area in one shift while it is in charge (a handover belongs to the incoming shift), aligned with `shifts`; for the shift under way, what is left of it. */
export interface WeekShiftNeed {
  /** Highest need of the shift. */
  peak: { [P in keyof NeedColumns]: number };
  /** Staffed beds planned: fewest and most within the shift's own half hours, until the next one begins. */
  staffedLeast: number;
  staffedMost: number;
  /** Chance of any shortfall during the shift. */
  someTime: number;
  /** Staffed beds at their fewest minus P90 of the highest need. */
  headroom: number;
  /** Smallest constant beds whose chance of any shortfall in the shift is at most the planning risk. */
  bedsForPlanningRisk: number;
  /** The same raised to the safe minimum and to whole steps above it. */
  bedsToStaff: number;
  /** Beds to add to the plan throughout the shift, in whole steps, that bring the chance to the planning risk and the plan to the safe minimum; 0 for none. */
  bedsToAdd: number;
  /** Of those, how many cannot be had because the bed spaces do not exist. */
  bedsThatDoNotExist: number;
  /** Chance of any shortfall with every bed space that exists staffed. */
  someTimeWithEverySpace: number;
  /** Nurse hours that `bedsToAdd` takes by the site's own ratio; null where the site has stated none. */
  nurseHours: number | null;
  /** Last chance to book, UTC seconds: the shift's start less its lead time or the area's notice, whichever is longer. */
  lastChanceAt: number;
}

export interface WeekAreaOutlook extends WeekNeedByHour {
  areaId: string;
  /** False: no census; the model's own distribution stands in its place at the start. */
  counted: boolean;
  shifts: WeekShiftNeed[];
  admissions: AdmissionColumns;
}

/** The whole department. */
export interface WeekDepartment {
  /** Pooled need against pooled beds by hour: as if every bed could take any patient. */
  pooled: WeekNeedByHour;
  /** Chance that at least one area is short at each full hour. */
  someAreaShort: number[];
  shifts: {
    /** Highest pooled need of the shift, and the pooled beds planned. */
    peak: { [P in keyof NeedColumns]: number };
    staffedLeast: number;
    staffedMost: number;
    /** Chance that at least one area is short some time in the shift. */
    someAreaShort: number;
    /** The same as if every bed could take any patient. */
    pooledShort: number;
  }[];
  admissions: AdmissionColumns;
}

/** A day that is not an ordinary one, and its effect on arrivals as a range. */
export interface WeekCalendarDay {
  date: string;
  name: string;
  kind: 'public holiday' | 'local event' | 'closure';
  /** The day, UTC seconds. */
  from: number;
  to: number;
  /** Factor on the day's arrivals beside an ordinary day of that date: the middle and a 90 % range. */
  effect: number;
  low: number;
  high: number;
  /** Learned from past days of the name, stated by the site, or neither: then the range is what such days may do. */
  basis: 'learned' | 'stated' | 'not known';
  /** Days of the name in the log. */
  pastDays: number;
}

/** Waits for a bed space in one shift, against the site's limit. */
export interface WeekShiftWaits extends ShiftWaits {
  /** Beds to add to the plan throughout the shift, in whole steps, with which at most the stated share wait longer than the limit; null where not even every bed space that exists is enough. */
  bedsToAdd: number | null;
}

/** Waits by area and shift, where the site has stated a limit. */
export interface WeekWaits {
  limitMinutes: number;
  /** The share of arrivals that may wait longer: the planning risk. */
  share: number;
  replications: number;
  /** In the input's order; null where the logs hold no bed-space times, so that waits cannot be known. */
  areas: (WeekShiftWaits[] | null)[];
}

/** Everything a week outlook is computed from; stored with it, so that it can be run again to the same digit. */
export interface WeekOutlookInput extends OutlookInput {
  areas: (OutlookInput['areas'][number] & { noticeHours: number; bedsPerNurse: number | null })[];
  /** The site's lead time, hours; null where it has stated none. */
  shifts: (OutlookInput['shifts'][number] & { leadTimeHours: number | null })[];
  /** Unusual days from the week before the outlook to the week after it, as known when it was issued. */
  calendar: NonNullable<OutlookInput['calendar']>;
  /** Local midnight that ends the last whole day; hours after it only complete the last night. */
  daysUntil: number;
  /** Joint draws behind the arrivals; 2,000 if left out. */
  arrivalDraws?: number;
  /** Ambulance arrivals counted in the logs' last year by area and 4 h block of the day: known ones, and those by ambulance; null where too few tell. */
  ambulance: { known: number[][]; byAmbulance: number[][] } | null;
}

/** A week outlook's result. */
export interface WeekOutlookResult {
  engineVersion: string;
  replications: number;
  planningRisk: number;
  /** Full local hours, UTC seconds. */
  hours: number[];
  /** Shifts within the outlook, ascending; the first may be under way. */
  shifts: WeekSpan[];
  /** Local days; the first is what is left of today. */
  days: WeekSpan[];
  arrivals: {
    hours: ArrivalTable;
    /** Whole shifts only. */
    shifts: ArrivalTable;
    days: ArrivalTable;
    /** The seven, and the fourteen, whole days after today. */
    weeks: ArrivalTable;
  };
  areas: WeekAreaOutlook[];
  department: WeekDepartment;
  calendar: WeekCalendarDay[];
  /** Arrivals an hour that an ordinary week of these dates brings, Monday 00:00 first, by area. */
  ordinaryWeek: number[][];
  /** Null where the site has stated no limit; absent in outlooks issued before waits were told. */
  waits?: WeekWaits | null;
  lengthOfStay: 'exponential' | 'empirical';
}
