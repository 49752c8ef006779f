import type { Database } from '../server/database/database.ts';
import { BriefSettings } from '../server/entities/BriefSettings.ts';
import type { DemoCaller } from './demo-caller.ts';
import { demoAccounts, generalId, saltbyId } from './farrowmere-accounts.ts';

const week = 7 * 86_400;

/**
 * Sets when the briefs go out and to whom, as the operations manager would have: Farrowmere General's at once, Saltby Bay's
 * after approval. Last Monday's is marked as not answered, so that the product makes up for it soon after the start, by
 * itself: the mailbox then shows a brief.
 */
export async function scheduleBriefs(database: Database, operations: DemoCaller): Promise<void> {
  const to = demoAccounts.filter(({ username }) => username === 'executive' || username === 'operations');
  for (const siteId of [generalId, saltbyId]) {
    for (const { name, email } of to) {
      await operations.send('POST', `/api/sites/${siteId}/brief-recipients`, { name, address: email });
    }
    await operations.send('PUT', `/api/sites/${siteId}/brief-settings`, {
      scheduled: true,
      weekday: 1,
      minuteOfDay: 7 * 60,
      approveFirst: siteId === saltbyId,
      covers: 'site',
    });
  }
  await database.write(async (manager) => {
    for (const settings of await manager.find(BriefSettings)) {
      await manager.update(BriefSettings, { siteId: settings.siteId }, { lastDueAt: settings.lastDueAt - week });
    }
  });
}
