import { halfHoursOfWeek } from '../../shared/domain/bed-schedule.ts';
import type { CareArea } from '../../server/entities/CareArea.ts';

/** A plan with the same staffed beds in every half hour, one figure for each area in turn; as the API takes it. */
export function flatPlan(areas: readonly CareArea[], beds: readonly number[], reason = 'As every week') {
  return {
    areas: areas.map((area, index) => ({
      areaId: area.id,
      halfHours: new Array<number>(halfHoursOfWeek).fill(beds[index]),
    })),
    reason,
  };
}
