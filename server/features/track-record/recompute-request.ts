import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import type { CalendarDay } from '../../../shared/forecasting/visit-table.ts';

export interface RecomputeSite {
  databaseFile: string;
  siteId: string;
  timeZone: string;
  stayCapHours: number;
  /** Outages and diversions; `areaId` null means every area. */
  gaps: { areaId: string | null; from: number; to: number }[];
  now: number;
}

/** What the recomputing thread is given: a fit on what was known at an instant, or a week of outlooks. */
export type RecomputeTask = RecomputeSite &
  (
    | { kind: 'fit'; until: number; calendar: CalendarDay[] }
    | {
        kind: 'week';
        /** The model of the week before; its level is moved on to `until` first. */
        modelId: string;
        until: number;
        /** Inputs as the issuer makes them, without the counts of their time: those are taken from the logs. */
        inputs: OutlookInput[];
        /** The same of the week ahead, one a day; none for weeks long past. */
        weekInputs: WeekOutlookInput[];
      }
  );

/** Everything as text, so that the main thread has nothing to turn into it. */
export interface RecomputedModel {
  parameters: string;
  trainedFrom: number;
  trainedTo: number;
  visits: number;
}

export interface RecomputedWeek {
  model: RecomputedModel;
  outlooks: {
    issuedAt: number;
    seed: number;
    replications: number;
    computeMilliseconds: number;
    input: string;
    result: string;
    laws: string;
    digest: string;
  }[];
  weekOutlooks: {
    issuedAt: number;
    seed: number;
    replications: number;
    computeMilliseconds: number;
    calendar: string;
    input: string;
    result: string;
    laws: string;
    digest: string;
  }[];
}
