import type { EntityManager } from 'typeorm';
import type { Recipient } from '../../../shared/api/brief-recipients.ts';
import type * as api from '../../../shared/api/briefs.ts';
import type { Brief } from '../../entities/Brief.ts';
import type { BriefDelivery } from '../../entities/BriefDelivery.ts';
import type { BriefRecipient } from '../../entities/BriefRecipient.ts';

export function presentBrief(brief: Brief): api.Brief {
  const { id, state, subject, siteIds, scheduledFor, composedAt, composedBy, approvedBy, approvedAt, sentAt } = brief;
  return { id, state, subject, siteIds, scheduledFor, composedAt, composedBy, approvedBy, approvedAt, sentAt };
}

/** Counts of deliveries by brief, tests left out. */
export async function tallyOf(
  read: EntityManager,
  briefIds: readonly string[],
): Promise<(briefId: string) => api.BriefTally> {
  const rows = await read.query<{ briefId: string; state: BriefDelivery['state']; count: number; returned: number }[]>(
    `SELECT briefId, state, count(*) AS count, count(returnedAt) AS returned FROM brief_delivery
     WHERE briefId IN (SELECT value FROM json_each(?)) AND recipientId IS NOT NULL GROUP BY briefId, state`,
    [JSON.stringify(briefIds)],
  );
  return (briefId) => {
    const count = (...states: BriefDelivery['state'][]) =>
      rows
        .filter((row) => row.briefId === briefId && states.includes(row.state))
        .reduce((sum, row) => sum + row.count, 0);
    return {
      sent: count('sent'),
      waiting: count('waiting', 'handing over'),
      refused: count('refused', 'given up'),
      notKnown: count('not known'),
      leftOut: count('left out'),
      returned: rows.filter((row) => row.briefId === briefId).reduce((sum, row) => sum + row.returned, 0),
    };
  };
}

export function presentDelivery(row: BriefDelivery): api.Delivery {
  const { recipientId, id, name, address, state, attempts, attemptedAt, sentAt, lastAnswer } = row;
  const { returnedAt, returnedBecause } = row;
  const sent = { state, attempts, attemptedAt, sentAt, lastAnswer, returnedAt, returnedBecause };
  return { id, name, address, test: recipientId === null, ...sent };
}

export function presentRecipient(row: BriefRecipient): Recipient {
  const { id, name, address, personId, addedBy, addedAt, askedAt, confirmedAt, unsubscribedAt, returnedAt } = row;
  const confirmed = confirmedAt === null ? 'asked' : returnedAt === null ? 'receives' : 'returned';
  const state = unsubscribedAt !== null ? 'unsubscribed' : confirmed;
  const kind = personId === null ? 'outside' : 'person';
  return { id, name, address, kind, state, addedBy, addedAt, askedAt, confirmedAt, unsubscribedAt, returnedAt };
}
