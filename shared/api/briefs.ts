import { z } from 'zod';
import { defineContract } from './contract.ts';
import { subscription } from './brief-recipients.ts';
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
  /** Taken by the mail server and returned later; among `sent`. */
  returned: z.int(),
});
export type BriefTally = z.infer<typeof tally>;

const settingsReply = settings.extend({
  nextDueAt: instant.nullable(),
  /** Whether the caller may set it to cover the whole health group: only who may send at each of its sites. */
  mayCoverGroup: z.boolean(),
  groupName: z.string(),
});

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
  /** When a report came that it could not be delivered after all (RFC 3464); null if none did. */
  returnedAt: instant.nullable(),
  /** The report's status code (RFC 3463), for instance 5.1.1, and what it says, without addresses. */
  returnedBecause: z.string().nullable(),
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
