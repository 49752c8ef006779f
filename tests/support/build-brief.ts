import type { Database } from '../../server/database/database.ts';
import { newId } from '../../server/database/new-id.ts';
import { Brief } from '../../server/entities/Brief.ts';
import { BriefRecipient } from '../../server/entities/BriefRecipient.ts';
import type { BuiltSite } from './build-site.ts';

/** A brief that nobody was sent yet, with the mark of each recipient's own link in both parts. */
export async function buildBrief(database: Database, { site }: BuiltSite, more: Partial<Brief> = {}): Promise<Brief> {
  return database.write((manager) =>
    manager.save(
      manager.create(Brief, {
        id: newId(),
        siteId: site.id,
        siteIds: [site.id],
        state: 'draft',
        scheduledFor: null,
        composedAt: 1_790_000_000,
        composedBy: 'Test',
        approvedBy: null,
        approvedAt: null,
        sentAt: null,
        subject: 'Test site, weekly brief',
        html: '<!doctype html><html><head></head><body><p>Düne</p><img src="cid:a" alt=""><a href="{{unsubscribe}}">x</a></body></html>',
        text: 'Düne.\n.\nUnsubscribe: {{unsubscribe}}\n',
        attachments: JSON.stringify([{ cid: 'a', contentType: 'image/png', content: 'iVBORw0KGgo=' }]),
        ...more,
      }),
    ),
  );
}

/** Outside addresses that have confirmed, in this order. */
export async function buildRecipients(
  database: Database,
  { site }: BuiltSite,
  addresses: readonly string[],
  more: Partial<BriefRecipient> = {},
): Promise<BriefRecipient[]> {
  return database.write(async (manager) => {
    const rows = addresses.map((address, index) =>
      manager.create(BriefRecipient, {
        id: newId(),
        siteId: site.id,
        personId: null,
        name: `Recipient ${String(index + 1)}`,
        address,
        addedBy: 'Test',
        addedAt: 1000 + index,
        askedAt: 1000,
        confirmedAt: 1001,
        unsubscribedAt: null,
        removedAt: null,
        returnedAt: null,
        ...more,
      }),
    );
    for (let at = 0; at < rows.length; at += 50) await manager.insert(BriefRecipient, rows.slice(at, at + 50));
    return rows;
  });
}
