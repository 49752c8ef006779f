import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

export const covers = z.enum(['site', 'group']);
export type Covers = z.infer<typeof covers>;

/** When the weekly brief goes out, in the site's own time, and how. */
const settings = z.object({
  scheduled: z.boolean(),
  /** ISO: 1 Monday .. 7 Sunday. */
  weekday: z.int().min(1).max(7),
  minuteOfDay: z.int().min(0).max(1439).multipleOf(15, 'A quarter of an hour'),
  approveFirst: z.boolean(),
  covers,
});
export type BriefSettings = z.infer<typeof settings>;

export const briefStates = ['draft', 'awaiting approval', 'sending', 'sent'] as const;

export const brief = z.object({
  id,
  state: z.enum(briefStates),
  subject: z.string(),
  siteIds: z.array(id),
  /** The due time that it answers; null: somebody composed it. */
  scheduledFor: instant.nullable(),
  composedAt: instant,
  composedBy: z.string(),
  approvedBy: z.string().nullable(),
  approvedAt: instant.nullable(),
  sentAt: instant.nullable(),
});
export type Brief = z.infer<typeof brief>;

/** What stands of a brief's recipients, without tests. */
const tally = z.object({
  sent: z.int(),
  waiting: z.int(),
  refused: z.int(),
  notKnown: z.int(),
  leftOut: z.int(),
});
export type BriefTally = z.infer<typeof tally>;

const settingsReply = settings.extend({
  nextDueAt: instant.nullable(),
  /** Whether the caller may set it to cover the whole health group: only who may send at each of its sites. */
  mayCoverGroup: z.boolean(),
  groupName: z.string(),
});

/** Own subscription: none, or since when. */
const subscription = z.object({ subscribed: z.boolean(), address: z.string() });
export type Subscription = z.infer<typeof subscription>;

const briefParams = siteParams.extend({ briefId: id });
const base = '/api/sites/:siteId/briefs';

export const listBriefs = defineContract({
  id: 'listBriefs',
  method: 'get',
  path: base,
  access: 'brief:read',
  summary: 'Weekly briefs of the site, newest first; drafts only for who may send.',
  params: siteParams,
  reply: z.object({
    briefs: z.array(brief.extend({ tally })),
    settings: settingsReply,
    subscription: subscription.nullable(),
    /** Why the newest brief that was due could not be written. */
    failure: z.object({ at: instant, error: z.string() }).nullable(),
  }),
});

export const getBrief = defineContract({
  id: 'getBrief',
  method: 'get',
  path: `${base}/:briefId`,
  access: 'brief:read',
  summary: 'One brief with its plain-text part.',
  params: briefParams,
  reply: brief.extend({ tally, text: z.string() }),
});

export const getBriefHtml = defineContract({
  id: 'getBriefHtml',
  method: 'get',
  path: `${base}/:briefId/html`,
  access: 'brief:read',
  summary: 'The HTML part exactly as it was sent, its pictures put in place; it runs no script.',
  params: briefParams,
  reply: z.string(),
  replyType: 'text/html',
});

export const composeBrief = defineContract({
  id: 'composeBrief',
  method: 'post',
  path: base,
  access: 'brief:send',
  summary: 'Compose a draft of the brief as of now, to look at, to send as a test, or to send.',
  params: siteParams,
  status: 201,
  reply: brief.extend({ tally }),
});

export const sendBrief = defineContract({
  id: 'sendBrief',
  method: 'post',
  path: `${base}/:briefId/sending`,
  access: 'brief:send',
  summary: 'Approve a brief that waits, or a draft, and send it to the recipients.',
  params: briefParams,
  status: 202,
  reply: brief.extend({ tally }),
});

export const sendTestBrief = defineContract({
  id: 'sendTestBrief',
  method: 'post',
  path: `${base}/:briefId/test`,
  access: 'brief:send',
  summary: 'Send a brief to oneself alone.',
  params: briefParams,
  status: 202,
  reply: z.object({ address: z.string() }),
});

const deliveryStates = ['waiting', 'handing over', 'sent', 'refused', 'left out', 'given up', 'not known'] as const;

export const delivery = z.object({
  id,
  name: z.string(),
  address: z.string(),
  test: z.boolean(),
  state: z.enum(deliveryStates),
  attempts: z.int(),
  attemptedAt: instant.nullable(),
  sentAt: instant.nullable(),
  lastAnswer: z.string().nullable(),
});
export type Delivery = z.infer<typeof delivery>;

export const listDeliveries = defineContract({
  id: 'listDeliveries',
  method: 'get',
  path: `${base}/:briefId/deliveries`,
  access: 'brief:send',
  summary: 'To whom a brief went, with attempts and what the mail server said.',
  params: briefParams,
  reply: z.object({ deliveries: z.array(delivery) }),
});

export const resendDelivery = defineContract({
  id: 'resendDelivery',
  method: 'post',
  path: `${base}/:briefId/deliveries/:deliveryId/resending`,
  access: 'brief:send',
  summary:
    'Send to one recipient again, under the same Message-ID, where it is not known whether it arrived or it was given up.',
  params: briefParams.extend({ deliveryId: id }),
  status: 202,
  reply: delivery,
});

export const saveBriefSettings = defineContract({
  id: 'saveBriefSettings',
  method: 'put',
  path: '/api/sites/:siteId/brief-settings',
  access: 'brief:send',
  summary: 'Set when the weekly brief goes out, whether it waits for approval, and what it covers.',
  params: siteParams,
  body: settings,
  reply: settingsReply,
});

export const recipient = z.object({
  id,
  name: z.string(),
  address: z.string(),
  /** A person of the site, or an outside address. */
  kind: z.enum(['person', 'outside']),
  state: z.enum(['receives', 'asked', 'unsubscribed']),
  addedBy: z.string(),
  addedAt: instant,
  askedAt: instant.nullable(),
  confirmedAt: instant.nullable(),
  unsubscribedAt: instant.nullable(),
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

/** Signed links of mails; they lie outside the API, for browsers and mail programs without a session. */
const linkParams = z.object({ link: z.string().min(10).max(200) });
const page = { access: 'public', params: linkParams, reply: z.string(), replyType: 'text/html' } as const;

export const showConfirmation = defineContract({
  ...page,
  id: 'showConfirmation',
  method: 'get',
  path: '/mail/confirm/:link',
  summary: 'A page that asks whether an address wants the brief; changes nothing.',
});

export const confirmRecipient = defineContract({
  ...page,
  id: 'confirmRecipient',
  method: 'post',
  path: '/mail/confirm/:link',
  summary: 'Confirm an address by the link sent to it.',
});

export const showUnsubscribe = defineContract({
  ...page,
  id: 'showUnsubscribe',
  method: 'get',
  path: '/mail/unsubscribe/:link',
  summary: 'A page with a button to unsubscribe; changes nothing.',
});

export const unsubscribe = defineContract({
  ...page,
  id: 'unsubscribe',
  method: 'post',
  path: '/mail/unsubscribe/:link',
  summary: 'Unsubscribe in one click (RFC 8058) by a signed link, without a sign-in.',
});
