import type { Express } from 'express';
import * as api from '../../../shared/api/brief-recipients.ts';
import type { Dependencies } from '../../dependencies.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { addRecipient, confirmAddress, removeRecipient, setSubscription } from './change-recipients.ts';
import { presentRecipient } from './present.ts';
import { readPeopleToAdd } from './read-people.ts';

/** Whom a site's weekly brief goes to, and one's own subscription. */
export function addRecipientRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read } = deps.database;

  addSiteRoute(app, table, deps, api.listRecipients, async ({ site, now }) => {
    const recipients = await read.find(BriefRecipient, {
      where: { siteId: site.id },
      order: { addedAt: 'ASC', id: 'ASC' },
    });
    const shown = recipients.filter(({ removedAt }) => removedAt === null);
    return { recipients: shown.map(presentRecipient), people: await readPeopleToAdd(read, site, shown, now) };
  });

  addSiteRoute(app, table, deps, api.addRecipient, async (context) =>
    presentRecipient(await addRecipient(deps, context)),
  );

  addSiteRoute(app, table, deps, api.removeRecipient, async (context) => {
    await removeRecipient(deps, context);
    return undefined;
  });

  addSiteRoute(app, table, deps, api.confirmAddress, async (context) =>
    presentRecipient(await confirmAddress(deps, context)),
  );

  addSiteRoute(app, table, deps, api.setSubscription, (context) => setSubscription(deps, context));
}
