import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import * as api from '../../../shared/api/server-status.ts';
import { call } from '../../lib/api-client.ts';

const key = ['server-status'] as const;

/** How the server is; asked again every ten seconds, every second while a backup is under way. */
export function useServerStatus() {
  return useQuery({
    queryKey: key,
    queryFn: ({ signal }) => call(api.getServerStatus, { signal }),
    refetchInterval: (query) => (query.state.data?.backups.underWay ? 1000 : 10_000),
  });
}

export function useAskBackup() {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done: 'A backup is being made.' },
    mutationFn: () => call(api.askBackup, { kept: 'The backups that are there stay.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: key }),
  });
}

export function useRetryJob() {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done: 'The job is tried again.' },
    mutationFn: (jobId: string) => call(api.retryJob, { params: { jobId }, kept: 'The job stays failed.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: key }),
  });
}

export function useTestMail() {
  return useMutation({ mutationFn: () => call(api.sendTestMail) });
}
