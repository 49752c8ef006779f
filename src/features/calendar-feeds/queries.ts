import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { listCalendarFeeds, makeCalendarFeed, revokeCalendarFeed } from '../../../shared/api/calendar-feeds.ts';
import { call } from '../../lib/api-client.ts';

const feedsKey = (siteId: string) => ['calendar-feeds', siteId] as const;

/** Calendar feeds of the site, newest first. */
export function useCalendarFeeds(siteId: string) {
  return useQuery({
    queryKey: feedsKey(siteId),
    queryFn: async ({ signal }) => (await call(listCalendarFeeds, { params: { siteId }, signal })).feeds,
  });
}

/** Makes a feed; its address is in the reply and nowhere else, so nothing of it is cached. */
export function useMakeCalendarFeed(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    gcTime: 0,
    mutationFn: (name: string) => call(makeCalendarFeed, { params: { siteId }, body: { name } }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: feedsKey(siteId) }),
  });
}

export function useRevokeCalendarFeed(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (feedId: string) =>
      call(revokeCalendarFeed, { params: { siteId, feedId }, kept: 'The feed works as before.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: feedsKey(siteId) }),
  });
}
