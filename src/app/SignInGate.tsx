import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useLayoutEffect, useRef, useState } from 'react';
import { Navigate, Outlet, useLocation } from 'react-router-dom';
import { ProblemNotice } from '../components/Notice.tsx';
import { Skeleton } from '../components/Skeleton.tsx';
import { SessionProvider, sessionKey, useSessionQuery } from '../features/sign-in/session.ts';
import type { SignedInSession } from '../features/sign-in/session.ts';
import { followSession } from '../features/sign-in/kept-session.ts';
import type { Session } from '../../shared/api/session.ts';
import { onSignedOut } from '../lib/api-client.ts';
import { claimTab } from '../lib/tab-owner.ts';
import { SignedOutPage } from '../pages/SignedOutPage.tsx';
import { IdleLock } from './IdleLock.tsx';
import { paths } from './paths.ts';

/**
 * Lets signed-in people through. A session that ends while a page is open hides the page but keeps
 * it, so that nothing typed is lost if signing in again happens in another tab.
 */
export function SignInGate() {
  const queryClient = useQueryClient();
  const location = useLocation();
  const query = useSessionQuery();
  const [lastSession, setLastSession] = useState<SignedInSession | null>(null);

  useEffect(
    () =>
      onSignedOut(() => {
        queryClient.setQueryData<Session>(sessionKey, (session) =>
          session ? { ...session, person: null, sites: [] } : session,
        );
      }),
    [queryClient],
  );

  const session = query.data?.person ? (query.data as SignedInSession) : null;
  if (session && session !== lastSession) setLastSession(session);
  const personId = session?.person.id ?? lastSession?.person.id;
  const seenBy = useRef(personId);
  // Somebody else signed in on this device: nothing that was read for the person before, or typed by them, stays.
  useLayoutEffect(() => {
    if (personId !== undefined) claimTab(personId);
    if (seenBy.current !== undefined && seenBy.current !== personId) {
      void queryClient.resetQueries({ predicate: ({ queryKey }) => queryKey[0] !== sessionKey[0] });
    }
    seenBy.current = personId;
  }, [personId, queryClient]);
  // As soon as the server answers again, everything is asked for anew.
  const known = query.data;
  const wasKept = useRef(false);
  useLayoutEffect(() => {
    if (!known) return;
    followSession(known, Date.now());
    if (wasKept.current && known.person && known.keptAt === undefined) {
      void queryClient.invalidateQueries({ predicate: ({ queryKey }) => queryKey[0] !== sessionKey[0] });
    }
    wasKept.current = known.keptAt !== undefined;
  }, [known, queryClient]);
  const here = location.pathname + location.search + location.hash;

  if (!query.data) {
    return (
      <main className="page-pad mx-auto max-w-3xl py-16">
        {query.error ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : (
          <Skeleton className="h-11 w-3/5" label="Loading" />
        )}
      </main>
    );
  }
  if (!session && !lastSession) {
    return <Navigate to={paths.signIn(here === '/' ? undefined : here)} replace />;
  }
  const signedOut = !session;
  return (
    <>
      {signedOut ? (
        <SignedOutPage returnTo={here} locked={query.data.locked} />
      ) : (
        <IdleLock idleSeconds={session.idleSeconds} />
      )}
      <SessionProvider value={session ?? lastSession}>
        <div key={personId} hidden={signedOut}>
          <Outlet />
        </div>
      </SessionProvider>
    </>
  );
}
