import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { endOwnSession, listOwnSessions } from '../../../shared/api/session.ts';
import { call } from '../../lib/api-client.ts';

const key = ['own-sessions'] as const;

/** Where the person is signed in. */
export function useOwnSessions() {
  return useQuery({ queryKey: key, queryFn: ({ signal }) => call(listOwnSessions, { signal }) });
}

/** Ends one other session; done when the list no longer has it. */
export function useEndOwnSession() {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done: 'The session is ended.' },
    mutationFn: (sessionId: string) =>
      call(endOwnSession, { params: { sessionId }, kept: 'That session is still open.' }),
    onSettled: () => queryClient.invalidateQueries({ queryKey: key }),
  });
}
