import { z } from 'zod';
import { defineContract } from './contract.ts';

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

export const takeDeliveryReport = defineContract({
  id: 'takeDeliveryReport',
  method: 'post',
  path: '/mail/delivery-reports',
  access: 'public',
  summary:
    'A message that came to the address that mail is sent from, whole, for whoever bears DELIVERY_REPORT_TOKEN; 404 where none is set.',
  streamedBody: 'message/rfc822',
  status: 202,
  reply: z.object({
    /** What it was: a brief that came back for good or for now, one still on its way, or nothing of ours. */
    outcome: z.enum(['returned for good', 'returned for now', 'delayed', 'none of ours']),
  }),
});
