import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import * as api from '../../../shared/api/people.ts';
import type { Role } from '../../../shared/domain/permission.ts';
import { call } from '../../lib/api-client.ts';

const peopleKey = ['people'] as const;
const kept = 'The roles are as they were.';

export function usePeople(search: string) {
  return useQuery({
    queryKey: [...peopleKey, 'list', search],
    placeholderData: keepPreviousData,
    queryFn: ({ signal }) => call(api.listPeople, { query: { search: search || undefined }, signal }),
  });
}

export function usePerson(personId: string) {
  return useQuery({
    queryKey: [...peopleKey, 'one', personId],
    queryFn: ({ signal }) => call(api.getPerson, { params: { personId }, signal }),
  });
}

/** A mutation after which every list of people is asked again. */
function usePeopleMutation<Wish, Reply>(done: string, mutationFn: (wish: Wish) => Promise<Reply>) {
  const queryClient = useQueryClient();
  return useMutation({
    meta: { done },
    mutationFn,
    onSuccess: () => queryClient.invalidateQueries({ queryKey: peopleKey }),
  });
}

export interface PlaceWish {
  role: Role;
  siteId: string | null;
  groupId: string | null;
}

export const useInvite = () =>
  usePeopleMutation('Invited.', (body: { email: string; name: string }) => call(api.invitePerson, { body }));

export const useWithdrawInvitation = () =>
  usePeopleMutation('The invitation was withdrawn.', (personId: string) =>
    call(api.withdrawInvitation, { params: { personId }, kept }),
  );

export const useGiveRole = (personId: string) =>
  usePeopleMutation('The role was given.', (body: PlaceWish & { endsAt: number | null }) =>
    call(api.giveRole, { params: { personId }, body, kept }),
  );

export const useChangeRoleEnd = (personId: string) =>
  usePeopleMutation(
    'The end of the role was changed.',
    ({ roleId, endsAt }: { roleId: string; endsAt: number | null }) =>
      call(api.changeRoleEnd, { params: { personId, roleId }, body: { endsAt }, kept }),
  );

export const useRemoveRole = (personId: string) =>
  usePeopleMutation('The role was taken away.', (roleId: string) =>
    call(api.removeRole, { params: { personId, roleId }, kept }),
  );

export const useEndSessions = (personId: string) =>
  usePeopleMutation('All sessions were ended.', () => call(api.endSessions, { params: { personId } }));

export const useMakeGroupRole = () =>
  usePeopleMutation('The group now has the role.', (body: PlaceWish & { claim: string }) =>
    call(api.makeGroupRole, { body, kept }),
  );

export const useRemoveGroupRole = () =>
  usePeopleMutation('The group no longer has the role.', (groupRoleId: string) =>
    call(api.removeGroupRole, { params: { groupRoleId }, kept }),
  );
