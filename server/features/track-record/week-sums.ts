import type { EntityManager } from 'typeorm';
import type { TrackFilter } from '../../../shared/api/track-record.ts';
import { addSums, emptySums, type ScoreSums } from '../../../shared/forecasting/score-sums.ts';

/** A row of `score_week`; its sums as text. */
export interface SumRow {
  week: number;
  measure: TrackFilter['measure'];
  leadHours: number;
  areaId: string;
  shift: string;
  modelId: string;
  acknowledged: number;
  sums: string;
}

export interface ReadSums extends Omit<SumRow, 'sums'> {
  sums: ScoreSums;
}

/** Hours ahead at which a measure is scored, ascending. */
export async function readLeads(
  read: EntityManager,
  siteId: string,
  measure: TrackFilter['measure'],
): Promise<number[]> {
  const rows = await read.query<{ leadHours: number }[]>(
    'SELECT DISTINCT leadHours FROM score_week WHERE siteId = ? AND measure = ? ORDER BY leadHours',
    [siteId, measure],
  );
  return rows.map(({ leadHours }) => leadHours);
}

/** The lead that a filter means: its own, or where a measure other than need has none such, the nearest to the event. */
export function nearestLead(leads: readonly number[], { measure, lead }: TrackFilter): number {
  return measure === 'need' || leads.includes(lead) ? lead : (leads.at(0) ?? 0);
}

/** What some part of the page shows: at most one part of the filter is left open at a time. */
export function readSums(
  read: EntityManager,
  siteId: string,
  { measure, area, lead }: TrackFilter,
  fromWeek: number,
): Promise<SumRow[]> {
  return read.query<SumRow[]>(
    `SELECT week, measure, leadHours, areaId, shift, modelId, acknowledged, sums FROM score_week
     WHERE siteId = ? AND week >= ? AND measure = ? AND (areaId = ? OR leadHours = ?)`,
    [siteId, fromWeek, measure, area, lead],
  );
}

/** Sums of each week over everything else that rows differ in. */
export function byWeek(rows: readonly ReadSums[]): Map<number, ScoreSums> {
  const weeks = new Map<number, ScoreSums>();
  for (const { week, sums } of rows) {
    const own = weeks.get(week) ?? emptySums();
    weeks.set(week, own);
    addSums(own, sums);
  }
  return weeks;
}
