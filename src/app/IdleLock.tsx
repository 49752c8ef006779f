import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import type { Session } from '../../shared/api/session.ts';
import { sessionKey } from '../features/sign-in/session.ts';
import { lockSession } from '../features/sign-in/lock-session.ts';
import { isInUse, lastUse } from '../lib/last-use.ts';

const lookEveryMilliseconds = 10_000;
const reportEveryMilliseconds = 60_000;

/**
 * Locks the screen when nobody has touched it for the session's idle time, and tells the server of use that
 * asks for nothing (reading, typing), so that it does not lock under somebody's hands.
 */
export function IdleLock({ idleSeconds }: { idleSeconds: number }) {
  const queryClient = useQueryClient();
  const reportedAt = useRef(0);
  useEffect(() => {
    const timer = setInterval(() => {
      const idle = Date.now() - lastUse();
      if (idle > idleSeconds * 1000) {
        queryClient.setQueryData<Session>(sessionKey, (session) =>
          session ? { ...session, person: null, sites: [], locked: true } : session,
        );
        // The server locks by its own clock if this does not reach it.
        lockSession().catch(() => undefined);
      } else if (isInUse() && Date.now() - reportedAt.current > reportEveryMilliseconds) {
        reportedAt.current = Date.now();
        void queryClient.refetchQueries({ queryKey: sessionKey });
      }
    }, lookEveryMilliseconds);
    return () => clearInterval(timer);
  }, [idleSeconds, queryClient]);
  return null;
}
