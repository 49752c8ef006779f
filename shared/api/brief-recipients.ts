import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

/** Own subscription: none, or since when. */
export const subscription = z.object({ subscribed: z.boolean(), address: z.string() });
export type Subscription = z.infer<typeof subscription>;

export const recipient = z.object({
  id,
  name: z.string(),
  address: z.string(),
  /** A person of the site, or an outside address. */
  kind: z.enum(['person', 'outside']),
  /** 'returned': mail to it came back for good; it gets nothing until somebody confirms the address. */
  state: z.enum(['receives', 'asked', 'unsubscribed', 'returned']),
  addedBy: z.string(),
  addedAt: instant,
  askedAt: instant.nullable(),
  confirmedAt: instant.nullable(),
  unsubscribedAt: instant.nullable(),
  returnedAt: instant.nullable(),
});
export type Recipient = z.infer<typeof recipient>;

const recipients = '/api/sites/:siteId/brief-recipients';

export const listRecipients = defineContract({
  id: 'listRecipients',
  method: 'get',
  path: recipients,
  access: 'brief:send',
  summary: 'Whom the brief goes to, who was asked, and who unsubscribed; and people of the site who could be added.',
  params: siteParams,
  reply: z.object({
    recipients: z.array(recipient),
    people: z.array(z.object({ name: z.string(), address: z.string() })),
  }),
});

export const addRecipient = defineContract({
  id: 'addRecipient',
  method: 'post',
  path: recipients,
  access: 'brief:send',
  summary: 'Add a person of the site at once, or ask an outside address to confirm.',
  params: siteParams,
  body: z.object({
    name: z.string().trim().min(1, 'A name').max(100, 'At most 100 characters'),
    address: z.string().max(300),
  }),
  status: 201,
  reply: recipient,
});

export const removeRecipient = defineContract({
  id: 'removeRecipient',
  method: 'delete',
  path: `${recipients}/:recipientId`,
  access: 'brief:send',
  summary: 'Remove a recipient; a brief on its way passes them over.',
  params: siteParams.extend({ recipientId: id }),
  status: 204,
  reply: z.undefined(),
});

export const confirmAddress = defineContract({
  id: 'confirmRecipientAddress',
  method: 'post',
  path: `${recipients}/:recipientId/confirmation`,
  access: 'brief:send',
  summary: 'Confirm that an address whose mail came back is right: the next brief goes to it again.',
  params: siteParams.extend({ recipientId: id }),
  reply: recipient,
});

export const setSubscription = defineContract({
  id: 'setSubscription',
  method: 'put',
  path: '/api/sites/:siteId/brief-subscription',
  access: 'brief:subscribe',
  summary: 'Subscribe to the brief, or unsubscribe, for oneself.',
  params: siteParams,
  body: z.object({ subscribed: z.boolean() }),
  reply: subscription,
});
