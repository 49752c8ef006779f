import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { ambulanceBlockHours, ambulanceBlocks } from '../../../shared/forecasting/ambulance-share.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import type { SiteVisits } from '../../database/read-visits.ts';

const day = 86_400;
export const ambulanceHistorySeconds = 365 * day;
const leastKnown = 500;
/** With fewer than this share known, those known may be a choice of their own. */
const leastShareKnown = 0.8;

/**
 * Ambulance arrivals of the last year by area and block of the local day.
 * @param areaIds areas in the order wanted
 * @param until visits that arrived later were not known, UTC seconds
 * @returns null where the logs do not tell ambulances apart: few visits say how they came, or all say the same.
 */
export function countAmbulances(
  { table, areaIds: logAreas }: Pick<SiteVisits, 'table' | 'areaIds'>,
  areaIds: readonly string[],
  timeZone: string,
  until = Number.MAX_SAFE_INTEGER,
): WeekOutlookInput['ambulance'] {
  const zone = makeZone(timeZone);
  const zeros = (): number[][] => areaIds.map(() => new Array<number>(ambulanceBlocks).fill(0));
  const known = zeros();
  const byAmbulance = zeros();
  const placeOf = logAreas.map((id) => areaIds.indexOf(id));
  let all = 0;
  let told = 0;
  let carried = 0;
  for (let i = 0; i < table.length; i += 1) {
    const area = placeOf[table.area[i]];
    if (area < 0 || table.arrivalAt[i] >= until) continue;
    all += 1;
    const way = table.byAmbulance[i];
    if (way > 1) continue;
    const second = ((zone.toLocal(table.arrivalAt[i]) % day) + day) % day;
    const block = Math.floor(second / (ambulanceBlockHours * 3600));
    known[area][block] += 1;
    byAmbulance[area][block] += way;
    told += 1;
    carried += way;
  }
  if (told < leastKnown || told < leastShareKnown * all || carried === 0 || carried === told) return null;
  return { known, byAmbulance };
}
