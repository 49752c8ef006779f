import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { getTrackRecord, recomputeRecord, type TrackFilter } from '../../../shared/api/track-record.ts';
import { call } from '../../lib/api-client.ts';

const recordKey = (siteId: string) => ['track-record', siteId] as const;

/** The record under a filter; asked every ten seconds while past weeks are being recomputed. */
export function useTrackRecord(siteId: string, filter: TrackFilter) {
  return useQuery({
    queryKey: [...recordKey(siteId), filter],
    queryFn: ({ signal }) => call(getTrackRecord, { params: { siteId }, query: filter, signal }),
    placeholderData: keepPreviousData,
    refetchInterval: (query) => (query.state.data?.recomputing ? 10_000 : false),
  });
}

export function useRecompute(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (weeks: number) =>
      call(recomputeRecord, { params: { siteId }, body: { weeks }, kept: 'Nothing was started.' }),
    onSuccess: () =>
      Promise.all([
        queryClient.invalidateQueries({ queryKey: recordKey(siteId) }),
        queryClient.invalidateQueries({ queryKey: ['jobs', siteId] }),
      ]),
  });
}
