import type { Express } from 'express';
import { getOnCallAddress, setOnCallAddress } from '../../../shared/api/alerts.ts';
import { recordSettingChanges } from '../../database/record-setting-changes.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';

/** Where alert mail of a site goes. */
export function addAlertRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  addSiteRoute(app, table, deps, getOnCallAddress, ({ site }) => Promise.resolve({ address: site.onCallAddress }));

  addSiteRoute(app, table, deps, setOnCallAddress, async (context) => {
    const { site, body } = context;
    if (body.address !== site.onCallAddress) {
      await deps.database.write(async (manager) => {
        await manager.update(Site, { id: site.id }, { onCallAddress: body.address });
        await recordAudit(manager, context, 'site.on-call-address-changed', site.id, {
          from: site.onCallAddress,
          to: body.address,
        });
        const who = { siteId: site.id, at: context.now, madeBy: context.caller.person.name };
        await recordSettingChanges(manager, who, 'on-call', [
          { subject: null, setting: 'On-call address', before: site.onCallAddress, after: body.address },
        ]);
      });
    }
    return { address: body.address };
  });
}
