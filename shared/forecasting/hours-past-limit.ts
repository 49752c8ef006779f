import type { Zone } from '../domain/zoned-time.ts';
import type { NeedByHour, ShiftRisk } from './outlook-types.ts';
import { printedShortfall } from './printed-shortfall.ts';
import { hoursOfTonight } from './tonight-span.ts';

/** What is read of an outlook. */
export interface LimitOutlook {
  hours: readonly number[];
  areas: readonly (Pick<NeedByHour, 'shortfall' | 'shortfallWithin'> & {
    areaId: string;
    counted: boolean;
    shifts: readonly Pick<ShiftRisk, 'from' | 'to'>[];
  })[];
}

/**
 * The hours of tonight, UTC seconds ascending, whose printed chance of shortfall passes the area's limit:
 * what a panel asks about. None for an area that was not counted or that the outlook does not know.
 */
export function hoursPastLimit(
  result: LimitOutlook,
  areaId: string,
  area: { spaces: number; alertLimit: number },
  now: number,
  zone: Zone,
): number[] {
  const outlook = result.areas.find((candidate) => candidate.areaId === areaId);
  if (!outlook?.counted) return [];
  const printed = printedShortfall(outlook, area.spaces);
  return hoursOfTonight(result, now, zone)
    .filter((index) => printed[index].chance > area.alertLimit)
    .map((index) => result.hours[index]);
}
