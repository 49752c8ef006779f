import type { OutlookThen } from '../../../shared/api/outlooks.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { Site } from '../../entities/Site.ts';
import { notFound } from '../../errors.ts';
import { readPastHours } from './past-hours.ts';
import { presentOutlook, readOutlook } from './present.ts';
import { presentAcknowledgement, readAcknowledgementsMade } from './read-acknowledgements.ts';
import { readNeighbours } from './read-outlook-names.ts';

const hoursBefore = 12;

/** An earlier outlook as it stood, and what a census or a log then said of its hours. */
export async function presentOutlookThen(
  deps: Dependencies,
  site: Site,
  outlookId: string,
  now: number,
): Promise<OutlookThen> {
  const { read } = deps.database;
  const row = await readOutlook(read, site.id, outlookId);
  if (!row) throw notFound('This outlook');
  const outlook = await presentOutlook(read, row);
  const lastHour = outlook.result.hours.at(-1) ?? row.issuedAt;
  // A second past its last hour, so that this one belongs to what a log covers.
  const until = Math.min(now, lastHour + 1);
  const count = hoursBefore + Math.max(0, Math.ceil((until - row.issuedAt) / 3600));
  const { earlier, later } = await readNeighbours(read, site.id, row);
  const made = await readAcknowledgementsMade(read, site.id, row.issuedAt, later?.issuedAt ?? now + 1);
  const areas = await readAreas(read, site.id);
  return {
    outlook,
    past: await readPastHours(read, site, areas, makeZone(site.timeZone), until, count),
    acknowledgements: made.map(presentAcknowledgement),
    earlier,
    later,
  };
}
