import type { EntityManager } from 'typeorm';
import type * as api from '../../../shared/api/briefs.ts';
import { lastDue, nextDue } from '../../../shared/domain/brief-schedule.ts';
import { isGranted } from '../../../shared/domain/permission.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { ReplyOf } from '../../../shared/api/contract.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BriefSettings } from '../../entities/BriefSettings.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Site } from '../../entities/Site.ts';
import { badInput } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';

/** Monday 07:00, not scheduled: what stands before anybody has set anything. Common practice, no source. */
const initial = { scheduled: false, weekday: 1, minuteOfDay: 420, approveFirst: true, covers: 'site' as const };

export async function readSettings(read: EntityManager, siteId: string): Promise<api.BriefSettings> {
  return (await read.findOneBy(BriefSettings, { siteId })) ?? initial;
}

type Context = Pick<SiteContext<unknown>, 'site' | 'caller' | 'now'>;

export async function presentSettings(
  { database }: Dependencies,
  context: Context,
  { scheduled, weekday, minuteOfDay, approveFirst, covers }: api.BriefSettings,
): Promise<ReplyOf<typeof api.saveBriefSettings>> {
  const { site, now } = context;
  const group = await database.read.findOneByOrFail(HealthGroup, { id: site.groupId });
  const zone = makeZone(site.timeZone);
  return {
    scheduled,
    weekday,
    minuteOfDay,
    approveFirst,
    covers,
    nextDueAt: scheduled ? nextDue(zone, { weekday, minuteOfDay }, now) : null,
    mayCoverGroup: await mayCoverGroup(database.read, context),
    groupName: group.name,
  };
}

/** Saves when briefs go out. What was due before is not made up for: the first one is the next to come. */
export async function saveSettings(
  deps: Dependencies,
  context: SiteContext<typeof api.saveBriefSettings>,
): Promise<ReplyOf<typeof api.saveBriefSettings>> {
  const { site, body, now } = context;
  const { read, write } = deps.database;
  if (body.covers === 'group' && !(await mayCoverGroup(read, context))) {
    throw badInput('The settings were refused.', [
      {
        at: 'covers',
        message: 'A brief of the whole group can be set only by who may send briefs at each of its sites.',
      },
    ]);
  }
  await write(async (manager) => {
    const before = await manager.findOneBy(BriefSettings, { siteId: site.id });
    const lastDueAt = lastDue(makeZone(site.timeZone), body, now);
    await manager.save(Object.assign(new BriefSettings(), { siteId: site.id, ...body, lastDueAt }));
    await recordAudit(manager, context, 'brief.settings-changed', site.id, {
      from: before && {
        scheduled: before.scheduled,
        weekday: before.weekday,
        minuteOfDay: before.minuteOfDay,
        approveFirst: before.approveFirst,
        covers: before.covers,
      },
      to: body,
    });
  });
  return presentSettings(deps, context, body);
}

async function mayCoverGroup(read: EntityManager, { site, caller }: Context): Promise<boolean> {
  const sites = await read.find(Site, { where: { groupId: site.groupId }, select: { id: true } });
  return sites.every(({ id }) => isGranted(caller.rolesAt.get(id) ?? [], 'brief:send'));
}
