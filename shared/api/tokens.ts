import { z } from 'zod';
import { tokenPurposes } from '../domain/token-purpose.ts';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

export const tokenPurpose = z.enum(tokenPurposes);

/** A machine token as it is shown: never with its secret. */
export const machineToken = z.object({
  id,
  siteId: id,
  siteName: z.string(),
  purpose: tokenPurpose,
  name: z.string(),
  createdBy: z.string(),
  createdAt: instant,
  /** To the minute; null if never used. */
  lastUsedAt: instant.nullable(),
  revokedAt: instant.nullable(),
});
export type MachineToken = z.infer<typeof machineToken>;

/** What the token is for, in the site's own words: which system uses it. */
const name = z.string().trim().min(3, 'At least 3 characters').max(80, 'At most 80 characters');

const made = z.object({
  token: machineToken,
  /** Shown this once: only its digest is kept. Sent as `Authorization: Bearer …`. */
  secret: z.string(),
});
export type MadeToken = z.infer<typeof made>;

export const listTokens = defineContract({
  id: 'listTokens',
  method: 'get',
  path: '/api/tokens',
  access: 'installation:administer',
  summary: 'Machine tokens of every site, newest first, and the sites that one can be made for.',
  reply: z.object({ tokens: z.array(machineToken), sites: z.array(z.object({ id, name: z.string() })) }),
});

export const makeToken = defineContract({
  id: 'makeToken',
  method: 'post',
  path: '/api/tokens',
  access: 'installation:administer',
  summary: 'Make a machine token for a site and one purpose. The secret is shown once.',
  body: z.object({ siteId: id, purpose: tokenPurpose, name }),
  status: 201,
  reply: made,
});

export const revokeToken = defineContract({
  id: 'revokeToken',
  method: 'post',
  path: '/api/tokens/:tokenId/revocation',
  access: 'installation:administer',
  summary: 'Revoke a machine token: it is refused from its next call on.',
  params: z.object({ tokenId: id }),
  reply: machineToken,
});

const siteTokens = '/api/sites/:siteId/tokens';

export const listSiteTokens = defineContract({
  id: 'listSiteTokens',
  method: 'get',
  path: siteTokens,
  access: 'visit-log:upload',
  summary: 'Machine tokens for the nightly upload of visit logs to this site, newest first.',
  params: siteParams,
  reply: z.object({ tokens: z.array(machineToken) }),
});

export const makeSiteToken = defineContract({
  id: 'makeSiteToken',
  method: 'post',
  path: siteTokens,
  access: 'visit-log:upload',
  summary: 'Make a machine token for the nightly upload of visit logs. The secret is shown once.',
  params: siteParams,
  body: z.object({ name }),
  status: 201,
  reply: made,
});

export const revokeSiteToken = defineContract({
  id: 'revokeSiteToken',
  method: 'post',
  path: `${siteTokens}/:tokenId/revocation`,
  access: 'visit-log:upload',
  summary: 'Revoke a machine token for the nightly upload: it is refused from its next call on.',
  params: siteParams.extend({ tokenId: id }),
  reply: machineToken,
});
