import type { EntityManager } from 'typeorm';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { fullHoursAfter, readNeedInput } from '../../database/read-need-input.ts';
import type { Site } from '../../entities/Site.ts';

const outlookHours = 36;

/**
 * Gathers everything that Tonight's outlook is computed from, as of `now`.
 * @returns null where the site has no staffed-bed plan that names every area.
 */
export function buildOutlookInput(
  read: EntityManager,
  site: Site,
  modelAreaIds: readonly string[],
  now: number,
  replications: number,
): Promise<OutlookInput | null> {
  const hours = fullHoursAfter(makeZone(site.timeZone), now, outlookHours);
  return readNeedInput(read, site, modelAreaIds, now, hours, replications);
}
