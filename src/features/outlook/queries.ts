import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { enterCensus, getCensus } from '../../../shared/api/censuses.ts';
import type { CensusBody } from '../../../shared/api/censuses.ts';
import { getTonight } from '../../../shared/api/outlooks.ts';
import { getSite } from '../../../shared/api/sites.ts';
import { changeBedsNow } from '../../../shared/api/staffed-beds.ts';
import type { ChangeBedsBody } from '../../../shared/api/staffed-beds.ts';
import { call } from '../../lib/api-client.ts';

const tonightKey = (siteId: string) => ['tonight', siteId] as const;
const censusKey = (siteId: string) => ['census', siteId] as const;

/** The newest outlook. Asked again every half minute while the page is looked at, each second while one is computed. */
export function useTonight(siteId: string) {
  return useQuery({
    queryKey: tonightKey(siteId),
    queryFn: ({ signal }) => call(getTonight, { params: { siteId }, signal }),
    refetchInterval: (query) => (query.state.data?.computing ? 1000 : 30_000),
    refetchIntervalInBackground: false,
  });
}

/** The newest count of each area; follows the outlook's rhythm, so that fields nobody edited stay true. */
export function useCensus(siteId: string) {
  return useQuery({
    queryKey: censusKey(siteId),
    queryFn: ({ signal }) => call(getCensus, { params: { siteId }, signal }),
    refetchInterval: 30_000,
    refetchIntervalInBackground: false,
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

function useRefreshTonight(siteId: string) {
  const queryClient = useQueryClient();
  return () =>
    Promise.all([
      queryClient.invalidateQueries({ queryKey: tonightKey(siteId) }),
      queryClient.invalidateQueries({ queryKey: censusKey(siteId) }),
    ]);
}

/** Saves a census; done when the newer outlook is on the page. */
export function useEnterCensus(siteId: string) {
  const refresh = useRefreshTonight(siteId);
  return useMutation({
    mutationFn: (body: CensusBody) =>
      call(enterCensus, { params: { siteId }, body, kept: 'Your figures are still in the fields.' }),
    onSuccess: refresh,
  });
}

/** Changes the staffed beds of an area for this or the next shift. */
export function useChangeBeds(siteId: string) {
  const refresh = useRefreshTonight(siteId);
  return useMutation({
    mutationFn: (body: ChangeBedsBody) =>
      call(changeBedsNow, { params: { siteId }, body, kept: 'Your entry is still in the fields.' }),
    onSuccess: refresh,
  });
}
