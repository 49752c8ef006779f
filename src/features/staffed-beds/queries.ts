import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { getSite } from '../../../shared/api/sites.ts';
import {
  addBedException,
  getPlanVersion,
  getRequiredBeds,
  getStaffedBeds,
  listPlanVersions,
  removeBedException,
  savePlan,
} from '../../../shared/api/staffed-beds.ts';
import type { AddBedExceptionBody } from '../../../shared/api/staffed-beds.ts';
import type { BodyInputOf } from '../../../shared/api/contract.ts';
import { call } from '../../lib/api-client.ts';

const bedsKey = (siteId: string) => ['staffed-beds', siteId] as const;

/** Areas, shifts and limits of the site. */
export function useSite(siteId: string) {
  return useQuery({
    queryKey: ['site', siteId],
    queryFn: ({ signal }) => call(getSite, { params: { siteId }, signal }),
    staleTime: 60_000,
  });
}

/** The plan in force and the changes from now on. */
export function useStaffedBeds(siteId: string) {
  return useQuery({
    queryKey: bedsKey(siteId),
    queryFn: ({ signal }) => call(getStaffedBeds, { params: { siteId }, signal }),
  });
}

/** Beds required at the planning risk; asked again now and then, since a new plan or model makes a new week outlook. */
export function useRequiredBeds(siteId: string) {
  return useQuery({
    queryKey: [...bedsKey(siteId), 'required'],
    queryFn: ({ signal }) => call(getRequiredBeds, { params: { siteId }, signal }),
    refetchInterval: 60_000,
    refetchIntervalInBackground: false,
  });
}

export function usePlanVersions(siteId: string) {
  return useQuery({
    queryKey: [...bedsKey(siteId), 'versions'],
    queryFn: ({ signal }) => call(listPlanVersions, { params: { siteId }, signal }),
  });
}

/** A version as it was saved, which never changes; none is asked for without a number. */
export function usePlanVersion(siteId: string, version: number | null) {
  return useQuery({
    queryKey: ['plan-version', siteId, version],
    queryFn: ({ signal }) => call(getPlanVersion, { params: { siteId, version: version ?? 0 }, signal }),
    enabled: version !== null && version >= 1,
    staleTime: Infinity,
  });
}

function useRefresh(siteId: string) {
  const queryClient = useQueryClient();
  return () =>
    Promise.all([
      queryClient.invalidateQueries({ queryKey: bedsKey(siteId) }),
      queryClient.invalidateQueries({ queryKey: ['tonight', siteId] }),
    ]);
}

/** Saves a new version of the plan. Refused or not: what stands now is read again. */
export function useSavePlan(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (body: BodyInputOf<typeof savePlan>) =>
      call(savePlan, { params: { siteId }, body, kept: 'Your figures are still in the grid.' }),
    onSettled: refresh,
  });
}

export function useAddException(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    meta: { done: 'The exception was added.' },
    mutationFn: (body: AddBedExceptionBody) =>
      call(addBedException, { params: { siteId }, body, kept: 'What you entered is still in the fields.' }),
    onSuccess: refresh,
  });
}

export function useRemoveException(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (changeId: string) =>
      call(removeBedException, { params: { siteId, changeId }, kept: 'The exception stands as before.' }),
    onSuccess: refresh,
  });
}
