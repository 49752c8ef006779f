import type { EntityManager } from 'typeorm';
import type { RequiredBeds } from '../../../shared/api/staffed-beds.ts';
import type { WeekAreaOutlook, WeekSpan } from '../../../shared/forecasting/week-outlook-types.ts';
import type { Site } from '../../entities/Site.ts';

/**
 * Beds required at the planning risk by area and shift, from the newest week outlook; shifts that are over are left out.
 * Before the first outlook nothing is known, which `issuedAt` null says.
 * Cost: the database takes the few figures out of the outlook's text; a few milliseconds.
 */
export async function readRequiredBeds(read: EntityManager, site: Site, now: number): Promise<RequiredBeds> {
  const rows = await read.query<{ issuedAt: number; planningRisk: number; shifts: string; areas: string }[]>(
    `SELECT issuedAt, json_extract(result, '$.planningRisk') AS planningRisk, json_extract(result, '$.shifts') AS shifts,
       (SELECT json_group_array(json_object('areaId', area.value ->> '$.areaId', 'shifts', area.value -> '$.shifts'))
        FROM json_each(week_outlook.result, '$.areas') AS area) AS areas
     FROM week_outlook WHERE siteId = ? AND issuedAt <= ? ORDER BY issuedAt DESC LIMIT 1`,
    [site.id, now],
  );
  const newest = rows.at(0);
  if (!newest) return { issuedAt: null, planningRisk: site.planningRisk, areas: [] };
  const shifts = JSON.parse(newest.shifts) as WeekSpan[];
  const areas = JSON.parse(newest.areas) as Pick<WeekAreaOutlook, 'areaId' | 'shifts'>[];
  return {
    issuedAt: newest.issuedAt,
    planningRisk: newest.planningRisk,
    areas: areas.map(({ areaId, shifts: needs }) => ({
      areaId,
      shifts: shifts.flatMap(({ name, from, to }, index) => {
        if (to <= now) return [];
        const { bedsToStaff, bedsThatDoNotExist } = needs[index];
        return [{ name, from, to, beds: bedsToStaff, doNotExist: bedsThatDoNotExist }];
      }),
    })),
  };
}
