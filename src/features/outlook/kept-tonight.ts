import { z } from 'zod';
import { census } from '../../../shared/api/censuses.ts';
import { tonight } from '../../../shared/api/outlooks.ts';
import { site } from '../../../shared/api/sites.ts';
import { keepOnDevice, readKept } from '../../lib/kept-on-device.ts';

const keptTonight = z.object({ site, tonight, census: census.nullable() });

/** The parts of Tonight as they were last loaded. */
export type TonightParts = z.infer<typeof keptTonight>;

const nameOf = (siteId: string) => `tonight:${siteId}`;

/** Keeps the last good outlook of a site on this device for the person who reads it. */
export function keepTonight(personId: string, siteId: string, parts: TonightParts, loadedAt: number): void {
  keepOnDevice(personId, nameOf(siteId), parts, loadedAt);
}

/** The last good outlook that this device keeps, with the time it was loaded (this device's clock, milliseconds). */
export function readKeptTonight(personId: string, siteId: string): (TonightParts & { loadedAt: number }) | null {
  const kept = readKept(personId, nameOf(siteId));
  const parsed = kept && keptTonight.safeParse(kept.value);
  return kept && parsed?.success ? { ...parsed.data, loadedAt: kept.at } : null;
}
