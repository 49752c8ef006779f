import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import * as api from '../../../shared/api/installation.ts';
import { call } from '../../lib/api-client.ts';

const key = ['installation'] as const;
const kept = 'What you typed is still here.';

export function useInstallationSites() {
  return useQuery({
    queryKey: [...key, 'sites'],
    queryFn: ({ signal }) => call(api.listInstallationSites, { signal }),
  });
}

export function usePlaceChoices() {
  return useQuery({
    queryKey: [...key, 'places'],
    staleTime: Infinity,
    queryFn: ({ signal }) => call(api.getPlaceChoices, { signal }),
  });
}

function useInstallationMutation<Wish, Reply>(done: string, mutationFn: (wish: Wish) => Promise<Reply>) {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done },
    mutationFn,
    onSuccess: () => queryClient.invalidateQueries({ queryKey: [...key, 'sites'] }),
  });
}

export const useMakeGroup = () =>
  useInstallationMutation('The health group was made.', (name: string) =>
    call(api.makeGroup, { body: { name }, kept }),
  );

export const useRenameGroup = () =>
  useInstallationMutation('The name was changed.', ({ groupId, name }: { groupId: string; name: string }) =>
    call(api.renameGroup, { params: { groupId }, body: { name }, kept }),
  );

export const useMakeSite = () =>
  useInstallationMutation('The site was made.', (body: api.SiteBody) => call(api.makeSite, { body, kept }));

export const useChangeSite = (id: string) =>
  useInstallationMutation('The site was changed.', (body: Omit<api.SiteBody, 'areas'>) =>
    call(api.changeSite, { params: { id }, body, kept }),
  );

/** Adds an area where none is named, else changes it. */
export const useSaveArea = (id: string) =>
  useInstallationMutation('The area was saved.', ({ areaId, body }: { areaId: string | null; body: api.AreaBody }) =>
    areaId === null
      ? call(api.addArea, { params: { id }, body, kept })
      : call(api.changeArea, { params: { id, areaId }, body, kept }),
  );

export const useOrderAreas = (id: string) =>
  useInstallationMutation('The order was saved.', (areaIds: string[]) =>
    call(api.orderAreas, { params: { id }, body: { areaIds }, kept: 'The order that was saved before stays.' }),
  );

export const useRemoveArea = (id: string) =>
  useInstallationMutation('The area was removed.', (areaId: string) =>
    call(api.removeArea, { params: { id, areaId }, kept: 'The area stays.' }),
  );
