import type { BedStep } from '../domain/bed-schedule.ts';
import type { CalendarDay } from './visit-table.ts';

export type { BedStep };

/** What is counted in an area; null where no census was entered (never counted as zero). */
export interface AreaCensus {
  /** When it was counted, UTC seconds. */
  takenAt: number;
  /** Everyone in the area's care, waiting and boarding included. */
  present: number;
  waiting: number;
  boarding: number;
}

/** Everything an outlook is computed from; stored with it, so that it can be run again to the same digit. */
export interface OutlookInput {
  /** UTC seconds; the outlook's time 0. */
  issuedAt: number;
  timeZone: string;
  /** Full local hours that the outlook speaks for, UTC seconds, ascending, the first after issuedAt. */
  hours: number[];
  areas: {
    areaId: string;
    census: AreaCensus | null;
    /** First step at or before issuedAt. */
    staffedBeds: BedStep[];
    /** Bed spaces that exist. */
    spaces: number;
    safeMinimum: number;
    /** Beds are opened and closed in multiples of this. */
    bedStep: number;
    /** The chance past which Tonight speaks up, 0..1. */
    alertLimit: number;
  }[];
  /** Waiting patients whose area is not decided yet; null if not counted. */
  undecided: { takenAt: number; waiting: number } | null;
  /** The risk that beds are planned to, 0..1. */
  planningRisk: number;
  /** The site's limit for a wait; null where it has stated none, absent in outlooks issued before it was read. */
  waitLimitMinutes?: number | null;
  /** Shifts within the outlook, ascending by start; they may overlap at handover. */
  shifts: { name: string; from: number; to: number }[];
  /** Arrivals counted since `from` (live update), if known. */
  arrivalsSince: { from: number; to: number; count: number } | null;
  /** Unusual days about the outlook, as known when it was issued; they stand in place of those known at the fit. Absent in outlooks issued before it was stored. */
  calendar?: CalendarDay[];
  seed: number;
  replications: number;
}

/** A chance with its Monte Carlo standard error. */
export interface Chance {
  chance: number;
  se: number;
}

/** Percentiles of a count, one figure an hour each. */
export interface PercentilesByHour {
  p5: number[];
  p10: number[];
  p25: number[];
  p50: number[];
  p75: number[];
  p90: number[];
  p95: number[];
  mean: number[];
}

/** The need of one area, or of the whole department, hour by hour. */
export interface NeedByHour {
  need: PercentilesByHour;
  /** Staffed beds in force at each full hour. */
  staffed: number[];
  /** Chance that need exceeds staffed beds at the full hour. */
  shortfall: Chance[];
  /** Chance that need exceeds staffed beds at any time within the hour that ends at this full hour (seen at the end of every fifth minute). */
  shortfallWithin: Chance[];
  /** Staffed minus P90 of need. */
  headroom: number[];
  /** Smallest number of beds with chance of shortfall at most the planning risk, before steps and minimum. */
  bedsNeeded: number[];
}

/** One shift's answer for one area. */
export interface ShiftRisk {
  name: string;
  from: number;
  to: number;
  /** Chance of any shortfall during what is left of the shift. */
  someTime: Chance;
  /** Smallest constant staffed beds over the rest of the shift with P(need > beds at any time) at most the planning risk. */
  bedsForPlanningRisk: number;
  /** The same for the area's alert limit. */
  bedsForAlertLimit: number;
  /** `bedsForPlanningRisk` raised to the safe minimum and to whole steps above it: what a plan would staff. */
  bedsToStaff: number;
  /** Of those, how many cannot be had because the bed spaces do not exist. */
  bedsThatDoNotExist: number;
  /** What remains with every existing bed space staffed. */
  someTimeWithEverySpace: Chance;
}

export interface AreaOutlook extends NeedByHour {
  areaId: string;
  /** False: the area had no census; the model's own distribution stands in its place and the page says "not counted". */
  counted: boolean;
  shifts: ShiftRisk[];
  /** Index into `hours` of the first hour whose chance of shortfall passes the area's alert limit; null if none. */
  firstHourPastLimit: number | null;
  /** Beds to add at each hour, in the area's steps, to bring that hour's chance to the alert limit or under it. */
  bedsToAdd: number[];
  /** Of those, how many cannot be had because the bed spaces do not exist. */
  bedsThatDoNotExist: number[];
  /** Chance of shortfall at each hour with every existing bed space staffed: what beds alone cannot remove. */
  shortfallWithEverySpace: Chance[];
  /** The fewest beds, in the area's steps, that bring every later hour of the shift of `firstHourPastLimit` to the limit; null if none is past it. */
  smallestChange: { beds: number; from: number; to: number; doNotExist: number } | null;
  /** Boarding patients leaving by the first hour past the limit that would bring every later hour of that shift under it; null if none or not enough boarders. */
  boardingOut: { patients: number; by: number } | null;
  /** Admitted patients leaving within each hour. */
  admittedLeaving: PercentilesByHour;
  /** Arrivals within each hour that are expected to need admission. */
  arrivalsToAdmit: PercentilesByHour;
  /** Bed-hours short until the last hour: mean and P90. */
  bedHoursShort: { mean: number; p90: number };
  /** Highest need until the end of the first night: percentiles. */
  peak: { p50: number; p90: number; p95: number };
}

/** An outlook's result: only summaries are kept, never a replication. */
export interface OutlookResult {
  engineVersion: string;
  hours: number[];
  areas: AreaOutlook[];
  /** Pooled need against pooled beds: as if every bed could take any patient. */
  pooled: NeedByHour;
  /** Chance that at least one area is short, at each full hour. */
  someAreaShort: Chance[];
  /** The same at any time during each shift. */
  someAreaShortByShift: Chance[];
  /**
   * How the arrivals so far compare with what the model expected, if they were counted. `move`: expected arrivals of the next
   * twelve hours given the count, over those without it; absent in outlooks issued before it was stored.
   */
  arrivalsSoFar: {
    counted: number;
    expected: number;
    p10: number;
    p90: number;
    factor: number;
    move?: number;
  } | null;
  /** Which length of stay was used. */
  lengthOfStay: 'exponential' | 'empirical';
  replications: number;
}
