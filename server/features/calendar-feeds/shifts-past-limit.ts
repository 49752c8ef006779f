import type { EntityManager } from 'typeorm';
import type { OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { readAreas } from '../../database/read-site.ts';
import { readNewestWeekOutlook } from '../../database/read-week-outlook.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';

/** A shift of an area whose chance of shortfall is past the area's limit. */
export interface ShiftPastLimit {
  areaId: string;
  areaName: string;
  unit: 'bed' | 'chair';
  shift: string;
  from: number;
  to: number;
  chance: number;
  alertLimit: number;
  /** False: the forecast that says so stands on no census of the area. */
  counted: boolean;
  /** Beds to add to meet the planning risk, and how many of them do not exist; null where the forecast does not say. */
  toAdd: { beds: number; doNotExist: number; planningRisk: number } | null;
  lastChanceAt: number | null;
  /** Of the forecast that says so. */
  issuedAt: number;
}

/** What the feed tells: shifts past the limit by start, and when the newest forecast was issued (null: there is none). */
export interface FeedContent {
  shifts: ShiftPastLimit[];
  issuedAt: number | null;
}

/**
 * Every shift to come whose chance of any shortfall is past its area's limit: of Tonight's outlook where that reaches to the
 * shift's end, else of the week's. Limits are those of now.
 */
export async function readShiftsPastLimit(read: EntityManager, siteId: string, now: number): Promise<FeedContent> {
  const areas = new Map((await readAreas(read, siteId)).map((area) => [area.id, area]));
  const week = await readNewestWeekOutlook(read, siteId);
  const row = await read
    .createQueryBuilder(OutlookRow, 'outlook')
    .addSelect('outlook.result')
    .where('outlook.siteId = :siteId', { siteId })
    .orderBy('outlook.issuedAt', 'DESC')
    .addOrderBy('outlook.rowid', 'DESC')
    .limit(1)
    .getOne();
  const found = new Map<string, ShiftPastLimit>();
  const add = (
    areaId: string,
    shift: { name: string; from: number; to: number },
    more: Pick<ShiftPastLimit, 'chance' | 'counted' | 'toAdd' | 'lastChanceAt' | 'issuedAt'>,
  ): void => {
    const area = areas.get(areaId);
    if (!area || shift.to <= now) return;
    const key = `${areaId} ${String(shift.from)}`;
    found.set(key, {
      ...more,
      areaId,
      areaName: area.name,
      unit: area.spaceKind,
      shift: shift.name,
      from: shift.from,
      to: shift.to,
      alertLimit: area.alertLimit,
    });
  };
  if (week) {
    const { result } = week;
    for (const { areaId, counted, shifts } of result.areas) {
      shifts.forEach((risk, s) => {
        add(areaId, result.shifts[s], {
          chance: risk.someTime,
          counted,
          toAdd: { beds: risk.bedsToAdd, doNotExist: risk.bedsThatDoNotExist, planningRisk: result.planningRisk },
          lastChanceAt: risk.lastChanceAt,
          issuedAt: week.row.issuedAt,
        });
      });
    }
  }
  if (row && row.issuedAt >= (week?.row.issuedAt ?? 0)) {
    const result = JSON.parse(row.result) as OutlookResult;
    const last = result.hours[result.hours.length - 1];
    for (const { areaId, counted, shifts } of result.areas) {
      for (const risk of shifts) {
        if (risk.to > last) continue;
        const known = found.get(`${areaId} ${String(risk.from)}`);
        add(areaId, risk, {
          chance: risk.someTime.chance,
          counted,
          // What it takes was answered by the week's outlook; the chance is the newer one's.
          toAdd: known?.toAdd ?? null,
          lastChanceAt: known?.lastChanceAt ?? null,
          issuedAt: row.issuedAt,
        });
      }
    }
  }
  const issued = [week?.row.issuedAt, row?.issuedAt].filter((at) => at !== undefined);
  return {
    shifts: [...found.values()]
      .filter(({ chance, alertLimit }) => chance > alertLimit)
      .sort((a, b) => a.from - b.from || b.chance - a.chance),
    issuedAt: issued.length === 0 ? null : Math.max(...issued),
  };
}
