import type { Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { outlookSentence } from '../../../shared/forecasting/outlook-sentence.ts';
import type { OutlookSentence } from '../../../shared/forecasting/outlook-sentence.ts';
import { zoneOf } from '../../lib/format.ts';

/** The headline and lede of an outlook that is on the page. */
export function sentenceOf(tonight: Tonight, site: Site): OutlookSentence | null {
  const { outlook } = tonight;
  if (!outlook) return null;
  return outlookSentence({
    result: outlook.result,
    areas: site.areas.map((area) => ({
      areaId: area.id,
      name: area.name,
      spaceKind: area.spaceKind,
      spaces: area.spaces,
      alertLimit: area.alertLimit,
      censusTakenAt: outlook.census.find((entry) => entry.areaId === area.id)?.takenAt ?? null,
    })),
    now: tonight.now,
    zone: zoneOf(site.timeZone),
  });
}
