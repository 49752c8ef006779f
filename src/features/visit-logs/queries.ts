import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { getSite } from '../../../shared/api/sites.ts';
import { getVisitLogMapping, type RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import {
  acceptVisitLog,
  getVisitLog,
  listVisitLogs,
  withdrawVisitLog,
  type ExtractFactsInput,
  type StatedStaysInput,
} from '../../../shared/api/visit-logs.ts';
import { call } from '../../lib/api-client.ts';

const logsKey = (siteId: string) => ['visit-logs', siteId] as const;

/** Logs of the site; asked every two seconds while one is loading. */
export function useVisitLogs(siteId: string, enabled = true) {
  return useQuery({
    enabled,
    queryKey: logsKey(siteId),
    queryFn: async ({ signal }) => (await call(listVisitLogs, { params: { siteId }, signal })).logs,
    refetchInterval: (query) => (query.state.data?.some((log) => log.status === 'loading') ? 2000 : false),
  });
}

export function useVisitLog(siteId: string, logId: string) {
  return useQuery({
    queryKey: [...logsKey(siteId), logId],
    queryFn: ({ signal }) => call(getVisitLog, { params: { siteId, logId }, signal }),
    refetchInterval: (query) => (query.state.data?.status === 'loading' ? 1000 : false),
  });
}

/** The site's care areas and time zone. */
export function useSite(siteId: string) {
  return useQuery({
    queryKey: ['site', siteId],
    queryFn: ({ signal }) => call(getSite, { params: { siteId }, signal }),
    staleTime: 60_000,
  });
}

/** How the site's last file was read; null before the first. */
export function useVisitLogMapping(siteId: string, enabled: boolean) {
  return useQuery({
    enabled,
    // What was offered must not change under the steward's hands.
    refetchOnWindowFocus: false,
    queryKey: ['visit-log-mapping', siteId],
    queryFn: async ({ signal }) => (await call(getVisitLogMapping, { params: { siteId }, signal })).remembered,
  });
}

function useRefresh(siteId: string) {
  const queryClient = useQueryClient();
  return () =>
    Promise.all([
      queryClient.invalidateQueries({ queryKey: logsKey(siteId) }),
      queryClient.invalidateQueries({ queryKey: ['visit-log-mapping', siteId] }),
      queryClient.invalidateQueries({ queryKey: ['jobs', siteId] }),
      queryClient.invalidateQueries({ queryKey: ['arrival-models', siteId] }),
    ]);
}

export function useAcceptVisitLog(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (body: {
      checkId: string;
      goodRowsOnly: boolean;
      facts: ExtractFactsInput;
      leftOutBeforeSending: { rows: number; kinds: { problem: string; rows: number }[] };
      mapping?: RememberedMapping;
      statedStays?: StatedStaysInput | undefined;
    }) => call(acceptVisitLog, { params: { siteId }, body, kept: 'The checked file is kept for an hour.' }),
    onSuccess: refresh,
  });
}

export function useWithdrawVisitLog(siteId: string, logId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (reason: string) =>
      call(withdrawVisitLog, {
        params: { siteId, logId },
        body: { reason },
        kept: 'The log counts as before, and your reason is still in the field.',
      }),
    onSuccess: refresh,
  });
}
