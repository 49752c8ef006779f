import type { EntityManager } from 'typeorm';
import { holidayCountries } from '../../database/holiday-regions.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Site } from '../../entities/Site.ts';
import { badInput, type Fault } from '../../errors.ts';

let zones: string[] | null = null;

/** Every time zone that the server can compute with. */
export function timeZones(): string[] {
  zones ??= [...new Set(['UTC', ...Intl.supportedValuesOf('timeZone')])].sort((a, b) => a.localeCompare(b, 'en'));
  return zones;
}

/** Refuses a group, zone, country or region that is not known, and a name that another site of the group has. */
export async function checkSite(
  read: EntityManager,
  body: { name: string; groupId: string; timeZone: string; country: string; region: string | null },
  ownId: string | null,
): Promise<void> {
  const faults: Fault[] = [];
  if (!(await read.existsBy(HealthGroup, { id: body.groupId })))
    faults.push({ at: 'groupId', message: 'There is no such group.' });
  if (!timeZones().includes(body.timeZone)) faults.push({ at: 'timeZone', message: 'This time zone is not known.' });
  const country = holidayCountries().find(({ code }) => code === body.country);
  if (!country) faults.push({ at: 'country', message: 'This country is not known.' });
  else if (body.region !== null && !country.regions.some(({ code }) => code === body.region))
    faults.push({ at: 'region', message: `This is no region of ${country.name}.` });
  const same = (await read.findBy(Site, { groupId: body.groupId })).some(
    (site) => site.id !== ownId && site.name.toLowerCase() === body.name.toLowerCase(),
  );
  if (same) faults.push({ at: 'name', message: 'Another site of the group has this name.' });
  if (faults.length > 0) throw badInput('The site was refused.', faults);
}
