import type { MessagePort } from 'node:worker_threads';
import type { ModelComparison } from '../../../shared/forecasting/compare-models.ts';
import type { CalendarDay } from '../../../shared/forecasting/visit-table.ts';

/** One of the two models; the thread reads its parameters itself. */
export interface ComparedRow {
  modelId: string;
  /** The logs it was fitted on. */
  logIds: string[];
  trainedTo: number;
}

/** What the comparing thread is given; it reads models and visits itself, through its own read-only connection. */
export interface CompareRequest {
  databaseFile: string;
  siteId: string;
  timeZone: string;
  candidate: ComparedRow;
  inUse: ComparedRow;
  calendar: CalendarDay[];
  /** Outages and diversions; `areaId` null means every area. */
  gaps: { areaId: string | null; from: number; to: number }[];
  stayCapHours: number;
  weeks: number;
  seed: number;
  now: number;
  /** Shares done, 0..1. */
  progress: MessagePort;
}

export type CompareReply = { refused: string } | { refused: null; result: ModelComparison };
