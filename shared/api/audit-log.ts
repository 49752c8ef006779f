import { z } from 'zod';
import { id, instant, note, queryInstant, siteParams } from './common.ts';
import { defineContract } from './contract.ts';

const eventId = z.coerce.number<number>().int().min(1).max(Number.MAX_SAFE_INTEGER);
const digest = z.string().regex(/^[0-9a-f]{64}$/);

export const auditEvent = z.object({
  id: z.int(),
  at: instant,
  actor: z.string(),
  siteId: z.string().nullable(),
  siteName: z.string().nullable(),
  event: z.string(),
  subject: z.string(),
  /** Counts and settings. */
  detail: z.record(z.string(), z.unknown()),
  address: z.string().nullable(),
  requestId: z.string().nullable(),
  /** none: nothing was typed with it; kept: its text is shown at the site only; taken out: by whom and when. */
  note: z.discriminatedUnion('state', [
    z.object({ state: z.literal('none') }),
    z.object({ state: z.literal('kept'), text: z.string().nullable() }),
    z.object({ state: z.literal('taken out'), at: instant, by: z.string() }),
  ]),
});
export type AuditEventReply = z.infer<typeof auditEvent>;

export const auditChain = z.object({
  whole: z.boolean(),
  /** Rows that were checked, every site's. */
  rows: z.int(),
  /** Digest of the newest row; written down elsewhere, it proves later that nothing before it changed. */
  head: digest,
  fault: z.object({ eventId: z.int(), kind: z.string() }).nullable(),
  checkedAt: instant,
});
export type AuditChain = z.infer<typeof auditChain>;

const filter = z.object({
  /** The event or what it is about, from its beginning, for instance visit-log. */
  event: z
    .string()
    .max(60)
    .regex(/^[a-z.-]*$/)
    .optional(),
  /** Part of the name of who did it. */
  actor: z.string().trim().max(80).optional(),
  from: queryInstant.optional(),
  until: queryInstant.optional(),
});
const page = filter.extend({ before: eventId.optional() });
const list = z.object({
  /** Newest first, 50 at most. */
  events: z.array(auditEvent),
  /** Where the next page begins; null at the end. */
  before: z.int().nullable(),
});
const site = { siteId: id.optional() };
const redaction = z.object({ reason: note.min(3, 'Say why, in 3 characters or more.') });

const everywhere = '/api/audit-events';
const here = '/api/sites/:siteId/audit-events';

export const listAuditEvents = defineContract({
  id: 'listAuditEvents',
  method: 'get',
  path: everywhere,
  access: 'audit-log:read-all',
  summary: 'The audit trail of the installation and every site, newest first, without the text of notes.',
  query: page.extend(site),
  reply: list.extend({ sites: z.array(z.object({ id, name: z.string() })) }),
});

export const listSiteAuditEvents = defineContract({
  id: 'listSiteAuditEvents',
  method: 'get',
  path: here,
  access: 'audit-log:read-site',
  summary: 'The audit trail of the site, newest first.',
  params: siteParams,
  query: page,
  reply: list,
});

export const exportAuditEvents = defineContract({
  id: 'exportAuditEvents',
  method: 'get',
  path: `${everywhere}/export`,
  access: 'audit-log:read-all',
  summary: 'The filtered audit trail as CSV with its digests, newest 100,000 rows at most.',
  query: filter.extend(site),
  reply: z.string(),
  replyType: 'text/csv',
});

export const exportSiteAuditEvents = defineContract({
  id: 'exportSiteAuditEvents',
  method: 'get',
  path: `${here}/export`,
  access: 'audit-log:read-site',
  summary: 'The filtered audit trail of the site as CSV with its digests, newest 100,000 rows at most.',
  params: siteParams,
  query: filter,
  reply: z.string(),
  replyType: 'text/csv',
});

export const checkAuditChain = defineContract({
  id: 'checkAuditChain',
  method: 'get',
  path: '/api/audit-chain',
  access: 'audit-log:read-all',
  summary:
    'Computes every digest of the audit trail again: whether a row was altered or removed. A minute old at most.',
  reply: auditChain,
});

export const checkSiteAuditChain = defineContract({
  id: 'checkSiteAuditChain',
  method: 'get',
  path: '/api/sites/:siteId/audit-chain',
  access: 'audit-log:read-site',
  summary: 'The same for those who read the trail of a site; the chain is one for the installation.',
  params: siteParams,
  reply: auditChain,
});

export const redactAuditNote = defineContract({
  id: 'redactAuditNote',
  method: 'post',
  path: `${everywhere}/:eventId/redaction`,
  access: 'audit-log:read-all',
  summary: 'Take the text of a note out, here and at the record that it was typed for. The event and the digest stay.',
  params: z.object({ eventId }),
  body: redaction,
  status: 204,
  reply: z.null(),
});

export const redactSiteAuditNote = defineContract({
  id: 'redactSiteAuditNote',
  method: 'post',
  path: `${here}/:eventId/redaction`,
  access: 'audit-log:read-site',
  summary: 'The same for a note of the site.',
  params: siteParams.extend({ eventId }),
  body: redaction,
  status: 204,
  reply: z.null(),
});
