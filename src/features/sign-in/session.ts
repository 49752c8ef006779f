import { queryOptions, useQuery } from '@tanstack/react-query';
import { createContext, use } from 'react';
import { getSession } from '../../../shared/api/session.ts';
import type { Session } from '../../../shared/api/session.ts';
import { call, fetchCsrfTokenWith, rememberCsrfToken } from '../../lib/api-client.ts';
import { isOutage } from '../../lib/api-error.ts';
import { readKeptSession } from './kept-session.ts';
import type { DeviceSession } from './kept-session.ts';

export const sessionKey = ['session'] as const;

const lookForServerEveryMilliseconds = 5000;

/** Who is signed in; if the server cannot say so to a page that was just opened, what this device last knew of it. */
async function fetchSession(signal: AbortSignal, known: boolean): Promise<DeviceSession> {
  try {
    const session = await call(getSession, { signal });
    rememberCsrfToken(session.csrfToken);
    return session;
  } catch (error) {
    const kept = known || !isOutage(error) ? null : readKeptSession(Date.now());
    if (!kept) throw error;
    fetchCsrfTokenWith(async () => (await call(getSession)).csrfToken);
    return kept;
  }
}

/** Who is signed in; also asked for before the first page's code is there. */
export const sessionQuery = queryOptions({
  queryKey: sessionKey,
  queryFn: ({ signal, client }) => fetchSession(signal, client.getQueryData(sessionKey) !== undefined),
  staleTime: 60_000,
});

/** Who is signed in; asked once, and again whenever the window is looked at: another tab may have signed out, or in. */
export function useSessionQuery() {
  return useQuery({
    ...sessionQuery,
    refetchInterval: ({ state }) => (state.data?.keptAt === undefined ? false : lookForServerEveryMilliseconds),
    refetchOnWindowFocus: 'always',
  });
}

export type SignedInSession = DeviceSession & { person: NonNullable<Session['person']> };
export type SessionSite = Session['sites'][number];

const SessionContext = createContext<SignedInSession | null>(null);
export const SessionProvider = SessionContext.Provider;

/** The session of the person who is signed in; for pages behind the sign-in gate. */
export function useSession(): SignedInSession {
  const session = use(SessionContext);
  if (!session) throw new Error('useSession is for pages behind the sign-in gate');
  return session;
}
