import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { getOnCallAddress, setOnCallAddress } from '../../../shared/api/alerts.ts';
import {
  addCalendarDays,
  getHolidayRegions,
  getLimitRecord,
  getSettingHistory,
  getSiteSettings,
  removeCalendarDay,
  saveAreas,
  saveRules,
  saveShifts,
} from '../../../shared/api/site-settings.ts';
import type { AreasBody, CalendarBody, RulesBody, ShiftsBody } from '../../../shared/api/site-settings.ts';
import { call } from '../../lib/api-client.ts';

const settingsKey = (siteId: string) => ['site-settings', siteId] as const;
const kept = 'What you entered is still in the fields.';

export function useSiteSettings(siteId: string) {
  return useQuery({
    queryKey: settingsKey(siteId),
    queryFn: ({ signal }) => call(getSiteSettings, { params: { siteId }, signal }),
  });
}

/** Countries and regions; they change with a new version of the product only. */
export function useHolidayRegions(siteId: string, enabled: boolean) {
  return useQuery({
    queryKey: ['holiday-regions'],
    queryFn: ({ signal }) => call(getHolidayRegions, { params: { siteId }, signal }),
    staleTime: Infinity,
    enabled,
  });
}

/** The nights of the last eight weeks; a new one comes once a day. */
export function useLimitRecord(siteId: string) {
  return useQuery({
    queryKey: ['limit-record', siteId],
    queryFn: ({ signal }) => call(getLimitRecord, { params: { siteId }, signal }),
    staleTime: 10 * 60_000,
  });
}

export function useSettingHistory(siteId: string) {
  return useQuery({
    queryKey: [...settingsKey(siteId), 'history'],
    queryFn: ({ signal }) => call(getSettingHistory, { params: { siteId }, signal }),
  });
}

export function useOnCallAddress(siteId: string) {
  return useQuery({
    queryKey: [...settingsKey(siteId), 'on-call'],
    queryFn: ({ signal }) => call(getOnCallAddress, { params: { siteId }, signal }),
  });
}

/** What a saved setting shows on is read again: this page, the site's facts, Tonight. */
function useRefresh(siteId: string) {
  const queryClient = useQueryClient();
  return () =>
    Promise.all(
      [settingsKey(siteId), ['site', siteId], ['tonight', siteId], ['staffed-beds', siteId]].map((queryKey) =>
        queryClient.invalidateQueries({ queryKey }),
      ),
    );
}

export function useSaveRules(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (body: RulesBody) => call(saveRules, { params: { siteId }, body, kept }),
    onSuccess: refresh,
  });
}

export function useSaveShifts(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (body: ShiftsBody) => call(saveShifts, { params: { siteId }, body, kept }),
    onSuccess: refresh,
  });
}

export function useSaveAreas(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (body: AreasBody) => call(saveAreas, { params: { siteId }, body, kept }),
    onSuccess: refresh,
  });
}

export function useAddCalendarDays(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    meta: { done: 'Added to the calendar.' },
    mutationFn: (body: CalendarBody) => call(addCalendarDays, { params: { siteId }, body, kept }),
    onSuccess: refresh,
  });
}

export function useRemoveCalendarDay(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (entryId: string) =>
      call(removeCalendarDay, { params: { siteId, entryId }, kept: 'The day stands as before.' }),
    onSuccess: refresh,
  });
}

export function useSetOnCallAddress(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: (address: string | null) => call(setOnCallAddress, { params: { siteId }, body: { address }, kept }),
    onSuccess: refresh,
  });
}
