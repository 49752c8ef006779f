import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { declareExposureGap, listExposureGaps, removeExposureGap } from '../../../shared/api/exposure-gaps.ts';
import type { BodyInputOf } from '../../../shared/api/contract.ts';
import { call } from '../../lib/api-client.ts';

const gapsKey = (siteId: string) => ['exposure-gaps', siteId] as const;

/** Outages and diversions of the site, newest first. */
export function useExposureGaps(siteId: string) {
  return useQuery({
    queryKey: gapsKey(siteId),
    queryFn: async ({ signal }) => (await call(listExposureGaps, { params: { siteId }, signal })).gaps,
  });
}

export function useDeclareGap(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done: 'The time was declared.' },
    mutationFn: (body: BodyInputOf<typeof declareExposureGap>) =>
      call(declareExposureGap, { params: { siteId }, body, kept: 'What you entered is still in the fields.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: gapsKey(siteId) }),
  });
}

export function useRemoveGap(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (gapId: string) =>
      call(removeExposureGap, { params: { siteId, gapId }, kept: 'It is declared as before.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: gapsKey(siteId) }),
  });
}
