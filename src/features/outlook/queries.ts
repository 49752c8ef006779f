import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { acknowledgeRisk } from '../../../shared/api/acknowledgements.ts';
import type { AcknowledgeBody } from '../../../shared/api/acknowledgements.ts';
import { enterCensus, getCensus } from '../../../shared/api/censuses.ts';
import type { CensusBody } from '../../../shared/api/censuses.ts';
import { getNightLog } from '../../../shared/api/night-log.ts';
import { getOutlookThen, getTonight } from '../../../shared/api/outlooks.ts';
import { getSite } from '../../../shared/api/sites.ts';
import { changeBedsNow } from '../../../shared/api/staffed-beds.ts';
import type { ChangeBedsBody } from '../../../shared/api/staffed-beds.ts';
import { call } from '../../lib/api-client.ts';

const tonightKey = (siteId: string) => ['tonight', siteId] as const;
const censusKey = (siteId: string) => ['census', siteId] as const;
const nightLogKey = (siteId: string) => ['night-log', siteId] as const;

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

/** What was done in the night of an instant; now, and followed, if none is given. */
export function useNightLog(siteId: string, at?: number) {
  return useQuery({
    queryKey: [...nightLogKey(siteId), at ?? 'now'],
    queryFn: ({ signal }) => call(getNightLog, { params: { siteId }, query: at === undefined ? {} : { at }, signal }),
    ...(at === undefined ? { refetchInterval: 60_000, refetchIntervalInBackground: false } : {}),
  });
}

/** An earlier outlook and what then happened; the one before stays on the page until it is there. */
export function useOutlookThen(siteId: string, outlookId: string) {
  return useQuery({
    queryKey: ['outlook-then', siteId, outlookId],
    queryFn: ({ signal }) => call(getOutlookThen, { params: { siteId, outlookId }, signal }),
    placeholderData: keepPreviousData,
    staleTime: 60_000,
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
      queryClient.invalidateQueries({ queryKey: nightLogKey(siteId) }),
    ]);
}

/** Acknowledges that an area passes its limit; done when the page shows who, when and what. */
export function useAcknowledge(siteId: string) {
  const refresh = useRefreshTonight(siteId);
  return useMutation({
    meta: { done: 'Acknowledged.' },
    mutationFn: (body: AcknowledgeBody) =>
      call(acknowledgeRisk, { params: { siteId }, body, kept: 'Your note is still in its field.' }),
    onSuccess: refresh,
  });
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
    meta: { done: 'The staffed beds were changed.' },
    mutationFn: (body: ChangeBedsBody) =>
      call(changeBedsNow, { params: { siteId }, body, kept: 'Your entry is still in the fields.' }),
    onSuccess: refresh,
  });
}
