import type { ShiftPattern } from '../../../shared/domain/shift-times.ts';
import type { Span } from '../../database/counting-spans.ts';
import type { OutlookLawsRow } from '../../entities/OutlookLawsRow.ts';

/** What the scoring thread is given; it reads outlooks and visits itself, through its own read-only connection. */
export type ScoreTask =
  | {
      kind: 'score';
      /** Outlooks of tonight, or of the week ahead. */
      of: 'tonight' | 'week';
      databaseFile: string;
      siteId: string;
      timeZone: string;
      stayCapHours: number;
      shifts: ShiftPattern[];
      /** Hours that no log can speak for. */
      gaps: Span[];
      /** Model as approved, by the id of every row that its level was moved on to. */
      approvedAs: Record<string, string>;
      /** Outlooks issued in [issuedFrom, issuedTo) are scored. */
      issuedFrom: number;
      issuedTo: number;
      now: number;
    }
  | { kind: 'sum'; databaseFile: string; siteId: string; weeks: number[] };

/** Columns of a score in the order of `scoreColumns`. */
export type ScoreValues = (string | number | null)[];

export const scoreColumns = [
  'siteId',
  'outlookId',
  'weekOutlookId',
  'modelId',
  'areaId',
  'measure',
  'leadHours',
  'shift',
  'fromAt',
  'toAt',
  'week',
  'acknowledged',
  'recomputed',
  'observed',
  'logScore',
  'absoluteError',
  'naiveError',
  'pinball',
  'intervals',
  'median',
  'pitLower',
  'pitUpper',
  'pit',
  'floorPinball',
  'floorError',
  'baselines',
  'chance',
  'short',
] as const;

export interface ScoredOutlook {
  outlookId: string;
  state: OutlookLawsRow['state'];
  scores: ScoreValues[];
}

/** Sums of one week in the order of `sumColumns`. */
export const sumColumns = [
  'siteId',
  'week',
  'measure',
  'leadHours',
  'areaId',
  'shift',
  'modelId',
  'acknowledged',
  'sums',
] as const;
