import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { formatNumber } from '../../lib/format.ts';

type Waits = NonNullable<NonNullable<WeekOutlook['result']['waits']>['areas'][number]>[number];

/** Waits of one area in one shift. */
export interface WaitRow {
  areaId: string;
  area: string;
  shift: WeekOutlook['result']['shifts'][number];
  waits: Waits;
}

/** The shifts to come of the days shown whose waits are known, the largest share past the limit first. */
export function waitRows({ result, issuedAt }: WeekOutlook, site: Site, until: number): WaitRow[] {
  const rows = result.areas.flatMap(({ areaId }, a) => {
    const area = site.areas.find(({ id }) => id === areaId)?.name ?? areaId;
    return (result.waits?.areas[a] ?? []).flatMap((waits, s): WaitRow[] => {
      const shift = result.shifts[s];
      return waits.overLimit !== null && shift.from > issuedAt && shift.from < until
        ? [{ areaId, area, shift, waits }]
        : [];
    });
  });
  return rows.sort((a, b) => (b.waits.overLimit ?? 0) - (a.waits.overLimit ?? 0) || a.shift.from - b.shift.from);
}

/** What to add for the wait limit. */
export function bedsInWords({ bedsToAdd }: Pick<Waits, 'bedsToAdd'>): string {
  if (bedsToAdd === null) return 'every space is not enough';
  return bedsToAdd === 0 ? 'nothing' : `+${formatNumber(bedsToAdd)}`;
}
