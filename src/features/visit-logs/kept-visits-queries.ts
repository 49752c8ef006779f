import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { getVisitLogPresence } from '../../../shared/api/visit-log-presence.ts';
import { getVisitRetention, setVisitRetention } from '../../../shared/api/visit-retention.ts';
import { call } from '../../lib/api-client.ts';

const retentionKey = (siteId: string) => ['visit-retention', siteId] as const;

/** How long the site keeps visits. */
export function useVisitRetention(siteId: string) {
  return useQuery({
    queryKey: retentionKey(siteId),
    queryFn: ({ signal }) => call(getVisitRetention, { params: { siteId }, signal }),
  });
}

export function useSetVisitRetention(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (days: number) =>
      call(setVisitRetention, { params: { siteId }, body: { days }, kept: 'Visits are kept as long as before.' }),
    onSuccess: () =>
      Promise.all([
        queryClient.invalidateQueries({ queryKey: retentionKey(siteId) }),
        queryClient.invalidateQueries({ queryKey: ['visit-logs', siteId] }),
      ]),
  });
}

/** Present by the logs against the censuses of the time for which a log counts. */
export function useLogPresence(siteId: string, logId: string, enabled: boolean) {
  return useQuery({
    enabled,
    queryKey: ['visit-logs', siteId, logId, 'presence'],
    queryFn: async ({ signal }) => (await call(getVisitLogPresence, { params: { siteId, logId }, signal })).compared,
  });
}
