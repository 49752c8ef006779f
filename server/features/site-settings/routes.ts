import type { Express } from 'express';
import { MoreThanOrEqual } from 'typeorm';
import * as contracts from '../../../shared/api/site-settings.ts';
import { localDate, makeZone } from '../../../shared/domain/zoned-time.ts';
import { holidayCountries } from '../../database/holiday-regions.ts';
import { publicHolidays } from '../../database/read-calendar.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { readRevisions } from '../../database/record-setting-changes.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CalendarEntry } from '../../entities/CalendarEntry.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { SettingChange } from '../../entities/SettingChange.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { addCalendarDays, removeCalendarDay } from './change-calendar.ts';
import { readLimitNights } from './limit-nights.ts';
import { saveAreas } from './save-areas.ts';
import { saveRules } from './save-rules.ts';
import { saveShifts } from './save-shifts.ts';

/** Told when a setting that an outlook is computed from has changed; answers with the outlook's id, or null where there is none. */
export type OnSettingsChanged = (siteId: string) => Promise<string | null>;

const historyListed = 500;
const daySeconds = 86_400;
/** Settings that no figure of an outlook is made of. */
const withoutEffect = new Set([
  'Wait limit',
  'Bed-meeting times',
  'Escalation text',
  'Lead time to book',
  'Beds a nurse looks after',
  'Lends beds to',
  'Notice to open',
]);

/** A site's settings: read by all who read Tonight, changed by operations, each change kept with old and new. */
export function addSiteSettingRoutes(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  onChanged: OnSettingsChanged,
): void {
  const { read } = deps.database;
  type Saved = Awaited<ReturnType<typeof saveRules>>;
  const answer = async (siteId: string, { changed, revision }: Saved) => {
    const matters = changed.some(({ setting }) => !withoutEffect.has(setting));
    return { revision, outlookId: matters ? await onChanged(siteId) : null };
  };

  addSiteRoute(app, table, deps, contracts.getSiteSettings, async ({ site, now }) => {
    const group = await read.findOneByOrFail(HealthGroup, { id: site.groupId });
    const today = makeZone(site.timeZone).toLocal(now);
    const ownDays = await read.find(CalendarEntry, {
      where: { siteId: site.id, date: MoreThanOrEqual(localDate(today - 31 * daySeconds)) },
      order: { date: 'ASC', name: 'ASC' },
    });
    const areas = await readAreas(read, site.id);
    const shifts = await readShifts(read, site.id);
    return {
      site: { ...site, groupName: group.name, areas, shifts },
      ownDays,
      publicHolidays: publicHolidays(
        site.country,
        site.region,
        localDate(today),
        localDate(today + 365 * daySeconds),
      ).map(({ date, name }) => ({ date, name })),
      revisions: await readRevisions(read, site.id),
    };
  });

  addSiteRoute(app, table, deps, contracts.getHolidayRegions, () => Promise.resolve({ countries: holidayCountries() }));

  addSiteRoute(app, table, deps, contracts.saveRules, async (context) =>
    answer(context.site.id, await saveRules(deps, context, context.body)),
  );

  addSiteRoute(app, table, deps, contracts.saveShifts, async (context) =>
    answer(context.site.id, await saveShifts(deps, context, context.body)),
  );

  addSiteRoute(app, table, deps, contracts.saveAreas, async (context) =>
    answer(context.site.id, await saveAreas(deps, context, context.body)),
  );

  addSiteRoute(app, table, deps, contracts.addCalendarDays, async (context) =>
    answer(context.site.id, await addCalendarDays(deps, context, context.body)),
  );

  addSiteRoute(app, table, deps, contracts.removeCalendarDay, async (context) =>
    answer(context.site.id, await removeCalendarDay(deps, context, context.params.entryId)),
  );

  addSiteRoute(app, table, deps, contracts.getSettingHistory, async ({ site }) => {
    const [changes, total] = await read
      .createQueryBuilder(SettingChange, 'change')
      .where('change.siteId = :siteId', { siteId: site.id })
      .orderBy('change.at', 'DESC')
      .addOrderBy('change.rowid', 'ASC')
      .take(historyListed)
      .getManyAndCount();
    return { changes, total };
  });

  addSiteRoute(app, table, deps, contracts.getLimitRecord, ({ site, now }) => readLimitNights(read, site, now));
}
