import type { EntityManager } from 'typeorm';
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
  const rows = await read.query<{ briefId: string; state: BriefDelivery['state']; count: number }[]>(
    `SELECT briefId, state, count(*) AS count FROM brief_delivery
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
    };
  };
}

export function presentDelivery(row: BriefDelivery): api.Delivery {
  const { id, name, address, recipientId, state, attempts, attemptedAt, sentAt, lastAnswer } = row;
  return { id, name, address, test: recipientId === null, state, attempts, attemptedAt, sentAt, lastAnswer };
}

export function presentRecipient(row: BriefRecipient): api.Recipient {
  const { id, name, address, personId, addedBy, addedAt, askedAt, confirmedAt, unsubscribedAt } = row;
  const state = unsubscribedAt !== null ? 'unsubscribed' : confirmedAt !== null ? 'receives' : 'asked';
  const kind = personId === null ? 'outside' : 'person';
  return { id, name, address, kind, state, addedBy, addedAt, askedAt, confirmedAt, unsubscribedAt };
}
