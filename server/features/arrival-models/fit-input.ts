import type { CalendarDay } from '../../../shared/forecasting/visit-table.ts';
import type { StaySource } from '../../../shared/forecasting/fit-hourly-stays.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import type { VisitLineage } from '../../database/read-visits.ts';
import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import type { MessagePort } from 'node:worker_threads';

/** What the fitting thread is given; it reads the visits itself, through its own read-only connection. */
export interface FitRequest {
  databaseFile: string;
  siteId: string;
  /** Only these logs; null: all that count. */
  logIds: string[] | null;
  timeZone: string;
  areaNames: Record<string, string>;
  /** Unusual days, past and a year ahead. */
  calendar: CalendarDay[];
  gaps: { areaId: string | null; from: number; to: number }[];
  stayCapHours: number;
  now: number;
  /** Shares done, 0..1, and a few words. */
  progress: MessagePort;
}

/** The part of a model's page that the fit makes. */
export type FittedDetail = Pick<
  ModelDetail,
  'settings' | 'areas' | 'streams' | 'departureBlocks' | 'variation' | 'findings'
>;

export type FitReply =
  | { refused: string }
  | {
      refused: null;
      parameters: ModelParameters;
      detail: FittedDetail;
      lineage: VisitLineage[];
      /** Null where stays come from visits. */
      staysFrom: StaySource | null;
      trainedFrom: number;
      trainedTo: number;
      visits: number;
    };
