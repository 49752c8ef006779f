import type { EntityManager } from 'typeorm';
import type { TrackRecord } from '../../../shared/api/track-record.ts';

type Filter = TrackRecord['filter'];

interface PointRow {
  outlookId: string | null;
  weekOutlookId: string | null;
  fromAt: number;
  toAt: number;
  observed: number;
  median: number | null;
  intervals: string | null;
  chance: number | null;
  short: number | null;
  acknowledged: number;
  recomputed: number;
}

/** The condition that a filter means on rows of `forecast_score`, with its values. */
export function filterCondition(siteId: string, filter: Filter): { where: string; values: (string | number)[] } {
  const conditions = ['siteId = ?', 'measure = ?', 'leadHours = ?', 'areaId = ?'];
  const values: (string | number)[] = [siteId, filter.measure, filter.lead, filter.area];
  if (filter.shift !== '') {
    conditions.push('shift = ?');
    values.push(filter.shift);
  }
  if (filter.model !== '') {
    conditions.push('modelId = ?');
    values.push(filter.model);
  }
  return { where: conditions.join(' AND '), values };
}

/** The newest scores under a filter, newest first. */
export async function readPoints(
  read: EntityManager,
  siteId: string,
  filter: Filter,
  count: number,
): Promise<TrackRecord['points']> {
  const { where, values } = filterCondition(siteId, filter);
  const rows = await read.query<PointRow[]>(
    `SELECT outlookId, weekOutlookId, fromAt, toAt, observed, median, intervals, chance, short, acknowledged, recomputed
     FROM forecast_score WHERE ${where} ORDER BY fromAt DESC LIMIT ?`,
    [...values, count],
  );
  return rows.map((row) => {
    const intervals = row.intervals === null ? null : (JSON.parse(row.intervals) as [number, number, number | null][]);
    return {
      outlookId: row.outlookId,
      weekOutlookId: row.weekOutlookId,
      from: row.fromAt,
      to: row.toAt,
      observed: row.observed,
      median: row.median,
      low90: intervals?.[2][0] ?? null,
      high90: intervals?.[2][1] ?? null,
      low50: intervals?.[0][0] ?? null,
      high50: intervals?.[0][1] ?? null,
      chance: row.chance,
      short: row.short === null ? null : row.short === 1,
      acknowledged: row.acknowledged === 1,
      recomputed: row.recomputed === 1,
    };
  });
}
