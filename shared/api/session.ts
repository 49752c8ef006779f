import { z } from 'zod';
import { permissions, roles } from '../domain/permission.ts';
import { defineContract } from './contract.ts';
import { id, instant } from './common.ts';

export const sessionSite = z.object({
  id,
  name: z.string(),
  groupName: z.string(),
  timeZone: z.string(),
  roles: z.array(z.enum(roles)),
  permissions: z.array(z.enum(permissions)),
});

export const session = z.object({
  person: z.object({ id, name: z.string(), email: z.string() }).nullable(),
  /** Sites at which the person holds a role, in the order of their names. */
  sites: z.array(sessionSite),
  /** Somebody is signed in here, but the session locked itself: only a fresh sign-in opens it. */
  locked: z.boolean(),
  /** Seconds without use after which a session locks. */
  idleSeconds: z.int(),
  /** Roles held for the installation (administrator). */
  installationRoles: z.array(z.enum(roles)),
  installationPermissions: z.array(z.enum(permissions)),
  /** Whom to ask for a role. */
  administratorContact: z.string(),
  /** Sent back as header x-csrf-token by every writing request. */
  csrfToken: z.string(),
  /** The server's clock, UTC seconds. */
  now: z.int(),
});
export type Session = z.infer<typeof session>;

export const getSession = defineContract({
  id: 'getSession',
  method: 'get',
  path: '/api/session',
  access: 'public',
  summary: 'Who is signed in, with which roles, and the anti-forgery token.',
  reply: session,
});

/** What may have gone wrong with a sign-in, as it stands in the address of the sign-in page (`problem`), which has the words. */
export type SignInProblem = 'unreachable' | 'refused' | 'expired' | 'fault' | 'busy';

export const signIn = defineContract({
  id: 'signIn',
  method: 'get',
  path: '/auth/sign-in',
  access: 'public',
  summary: 'Starts sign-in: redirects to the identity provider.',
  query: z.object({
    /** Where to go afterwards: a path of this application. */
    returnTo: z.string().max(500).optional(),
    /** "1" asks the identity provider for a fresh sign-in. */
    fresh: z.string().max(1).optional(),
  }),
  reply: z.undefined(),
});

export const signInCallback = defineContract({
  id: 'signInCallback',
  method: 'get',
  path: '/auth/callback',
  access: 'public',
  summary: 'The identity provider sends the person back here.',
  reply: z.undefined(),
});

export const signOut = defineContract({
  id: 'signOut',
  method: 'post',
  path: '/auth/sign-out',
  access: 'signed-in',
  summary: 'Ends the session here; the reply says where to end it at the identity provider.',
  reply: z.object({ redirectTo: z.string() }),
});

export const signOutEverywhere = defineContract({
  id: 'signOutEverywhere',
  method: 'post',
  path: '/auth/sign-out-everywhere',
  access: 'signed-in',
  summary: 'Ends every session of the person who asks, on every device.',
  reply: z.object({ redirectTo: z.string() }),
});

/** One of the caller's own sessions: a browser somewhere in which they are signed in. */
export const ownSession = z.object({
  /** Names the session; not the token that opens it. */
  id,
  /** Browser and system as the browser names them, for instance "Firefox on Windows". */
  device: z.string(),
  /** Where it signed in from, as the server saw it. */
  address: z.string(),
  signedInAt: instant,
  usedAt: instant,
  /** Left alone for too long: only a fresh sign-in opens it. */
  locked: z.boolean(),
  /** The one that asks. */
  current: z.boolean(),
});
export type OwnSession = z.infer<typeof ownSession>;

export const listOwnSessions = defineContract({
  id: 'listOwnSessions',
  method: 'get',
  path: '/api/own-sessions',
  access: 'signed-in',
  summary: 'Where the caller is signed in, the newest use first.',
  reply: z.object({ sessions: z.array(ownSession) }),
});

export const endOwnSession = defineContract({
  id: 'endOwnSession',
  method: 'post',
  path: '/api/own-sessions/:sessionId/ending',
  access: 'signed-in',
  summary: 'Ends one other session of the caller: it is refused from its next request on.',
  params: z.object({ sessionId: id }),
  status: 204,
  reply: z.null(),
});

export const lockSession = defineContract({
  id: 'lockSession',
  method: 'post',
  path: '/auth/lock',
  access: 'signed-in',
  summary: 'Locks the session: the next request needs a fresh sign-in.',
  status: 204,
  reply: z.null(),
});
