import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import * as api from '../../../shared/api/scenarios.ts';
import type { PlanChange } from '../../../shared/domain/plan-change.ts';
import { call } from '../../lib/api-client.ts';

const whatIfKey = (siteId: string) => ['what-if', siteId] as const;
const listKey = (siteId: string) => ['scenarios', siteId] as const;
const oneKey = (siteId: string, id: string) => ['scenario', siteId, id] as const;

/** Seven days as they stand, prepared for the exact method. Asked again every ten minutes: the figures stand for an hour. */
export function useWhatIf(siteId: string) {
  return useQuery({
    queryKey: whatIfKey(siteId),
    queryFn: ({ signal }) => call(api.getWhatIf, { params: { siteId }, signal }),
    staleTime: 60_000,
    refetchInterval: 600_000,
    refetchIntervalInBackground: false,
  });
}

/** Saved plans, newest first; asked every second while one is being confirmed. */
export function useScenarios(siteId: string) {
  return useQuery({
    queryKey: listKey(siteId),
    queryFn: async ({ signal }) => (await call(api.listScenarios, { params: { siteId }, signal })).scenarios,
    refetchInterval: (query) => (query.state.data?.some(({ state }) => state === 'confirming') ? 1000 : false),
  });
}

/** One plan with its confirmed differences. */
export function useScenario(siteId: string, scenarioId: string, state: string) {
  return useQuery({
    // A plan changes only with its state.
    queryKey: [...oneKey(siteId, scenarioId), state],
    queryFn: ({ signal }) => call(api.getScenario, { params: { siteId, scenarioId }, signal }),
    staleTime: Infinity,
  });
}

function useAfter(siteId: string) {
  const queryClient = useQueryClient();
  return () => queryClient.invalidateQueries({ queryKey: listKey(siteId) });
}

export function useSaveScenario(siteId: string) {
  const after = useAfter(siteId);
  return useMutation({
    mutationFn: (body: { name: string; changes: PlanChange[] }) =>
      call(api.saveScenario, { params: { siteId }, body, kept: 'The plan on this page is still here.' }),
    onSuccess: after,
  });
}

/** What is done with a saved plan by a press. */
export function usePlanAction(siteId: string, action: 'confirm' | 'cancel' | 'withdraw') {
  const after = useAfter(siteId);
  const contract = { confirm: api.confirmScenario, cancel: api.cancelConfirmation, withdraw: api.withdrawScenario }[
    action
  ];
  return useMutation({
    mutationFn: (scenarioId: string) =>
      call(contract, { params: { siteId, scenarioId }, kept: 'The plan is unchanged.' }),
    onSettled: after,
  });
}

export function useAdoptScenario(siteId: string, scenarioId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (body: { reason: string; as: (typeof api.adoptions)[number] }) =>
      call(api.adoptScenario, {
        params: { siteId, scenarioId },
        body,
        kept: 'The staffed beds are unchanged.',
      }),
    onSuccess: async () => {
      await queryClient.invalidateQueries({ queryKey: listKey(siteId) });
      await queryClient.invalidateQueries({ queryKey: oneKey(siteId, scenarioId) });
      await queryClient.invalidateQueries({ queryKey: whatIfKey(siteId) });
    },
  });
}
