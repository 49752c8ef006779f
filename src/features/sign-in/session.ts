import { useQuery } from '@tanstack/react-query';
import { createContext, use } from 'react';
import { getSession } from '../../../shared/api/session.ts';
import type { Session } from '../../../shared/api/session.ts';
import type { ReplyOf } from '../../../shared/api/contract.ts';
import { call, rememberCsrfToken } from '../../lib/api-client.ts';

export const sessionKey = ['session'] as const;

async function fetchSession(signal: AbortSignal): Promise<ReplyOf<typeof getSession>> {
  const session = await call(getSession, { signal });
  rememberCsrfToken(session.csrfToken);
  return session;
}

/** Who is signed in; asked once, and again whenever the window is looked at: another tab may have signed out, or in. */
export function useSessionQuery() {
  return useQuery({
    queryKey: sessionKey,
    queryFn: ({ signal }) => fetchSession(signal),
    staleTime: 60_000,
    refetchOnWindowFocus: 'always',
  });
}

export type SignedInSession = Session & { person: NonNullable<Session['person']> };
export type SessionSite = Session['sites'][number];

const SessionContext = createContext<SignedInSession | null>(null);
export const SessionProvider = SessionContext.Provider;

/** The session of the person who is signed in; for pages behind the sign-in gate. */
export function useSession(): SignedInSession {
  const session = use(SessionContext);
  if (!session) throw new Error('useSession is for pages behind the sign-in gate');
  return session;
}
