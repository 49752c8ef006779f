import type { CensusForm } from './census-form.ts';

const keepMilliseconds = 15 * 60_000;
const keyOf = (siteId: string) => `census-draft:${siteId}`;

/**
 * Typed figures outlive a lost session or a reload for a quarter of an hour, in this tab only:
 * counts, never anything about a person.
 */
export function keepDraft(siteId: string, draft: CensusForm | null, now: number): void {
  try {
    if (draft) sessionStorage.setItem(keyOf(siteId), JSON.stringify({ at: now, draft }));
    else sessionStorage.removeItem(keyOf(siteId));
  } catch {
    // Storage is refused: the figures live as long as the page.
  }
}

/** The figures typed less than a quarter of an hour ago, if they fit the site's areas. */
export function readDraft(siteId: string, areaIds: readonly string[], now: number): CensusForm | null {
  try {
    const kept = JSON.parse(sessionStorage.getItem(keyOf(siteId)) ?? 'null') as {
      at: number;
      draft: CensusForm;
    } | null;
    if (!kept || now - kept.at > keepMilliseconds) return null;
    const fits = kept.draft.areas.map((area) => area.areaId).join() === areaIds.join();
    return fits ? kept.draft : null;
  } catch {
    return null;
  }
}
