import { useQuery } from '@tanstack/react-query';
import { getSite } from '../../../shared/api/sites.ts';
import { getWeekAhead, getWeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { call } from '../../lib/api-client.ts';

/** The newest week outlook. Asked again each minute while the page is looked at, every few seconds while one is computed. */
export function useWeekAhead(siteId: string) {
  return useQuery({
    queryKey: ['week-ahead', siteId],
    queryFn: ({ signal }) => call(getWeekAhead, { params: { siteId }, signal }),
    refetchInterval: (query) =>
      query.state.data?.computing || query.state.data?.missing?.reason === 'not computed yet' ? 4000 : 60_000,
    refetchIntervalInBackground: false,
  });
}

/** One week outlook as it was issued; it never changes. */
export function useWeekThen(siteId: string, weekOutlookId: string) {
  return useQuery({
    queryKey: ['week-outlook', siteId, weekOutlookId],
    queryFn: ({ signal }) => call(getWeekOutlook, { params: { siteId, weekOutlookId }, signal }),
    staleTime: Infinity,
  });
}

/** Areas, shifts, limits and zone of the site. */
export function useSite(siteId: string) {
  return useQuery({
    queryKey: ['site', siteId],
    queryFn: ({ signal }) => call(getSite, { params: { siteId }, signal }),
    staleTime: 5 * 60_000,
  });
}
