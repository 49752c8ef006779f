import { In } from 'typeorm';
import type { setVisitRetention, VisitRetention } from '../../../shared/api/visit-retention.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';
import { askForPurge, keptFrom } from './purge-visits.job.ts';

/** How long the site keeps visits, and from which day on there are any. */
export async function readRetention(deps: Dependencies, siteId: string, now: number): Promise<VisitRetention> {
  const { read } = deps.database;
  const site = await read.findOneByOrFail(Site, { id: siteId });
  const oldest = await read.minimum(VisitLog, 'periodFrom', { siteId, status: In(['ready', 'loading']) });
  return { days: site.visitRetentionDays, keptFrom: keptFrom(site, now), oldest };
}

/** Sets how long visits are kept; what is too old then stops counting at once and is deleted by a job. */
export async function saveRetention(context: SiteContext<typeof setVisitRetention>): Promise<VisitRetention> {
  const { deps, site, body, now } = context;
  await deps.database.write(async (manager) => {
    const before = await manager.findOneByOrFail(Site, { id: site.id });
    if (before.visitRetentionDays === body.days) return;
    await manager.update(Site, { id: site.id }, { visitRetentionDays: body.days });
    await recordAudit(manager, context, 'visit-retention.changed', site.id, {
      from: before.visitRetentionDays,
      to: body.days,
    });
  });
  await askForPurge(deps, await deps.database.read.findOneByOrFail(Site, { id: site.id }));
  return readRetention(deps, site.id, now);
}
