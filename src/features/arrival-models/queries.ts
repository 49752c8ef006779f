import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { approveModel, fitModel, getModel, listModels, retireModel } from '../../../shared/api/arrival-models.ts';
import { call } from '../../lib/api-client.ts';

const modelsKey = (siteId: string) => ['arrival-models', siteId] as const;

/** Models of the site; asked every two seconds while one is being fitted. */
export function useModels(siteId: string) {
  return useQuery({
    queryKey: modelsKey(siteId),
    queryFn: ({ signal }) => call(listModels, { params: { siteId }, signal }),
    refetchInterval: (query) => (query.state.data?.models.some((model) => model.status === 'fitting') ? 2000 : false),
  });
}

export function useModel(siteId: string, modelId: string) {
  return useQuery({
    queryKey: [...modelsKey(siteId), modelId],
    queryFn: ({ signal }) => call(getModel, { params: { siteId, modelId }, signal }),
    refetchInterval: (query) => (query.state.data?.status === 'fitting' ? 2000 : false),
  });
}

function useRefresh(siteId: string) {
  const queryClient = useQueryClient();
  return () =>
    Promise.all([
      queryClient.invalidateQueries({ queryKey: modelsKey(siteId) }),
      queryClient.invalidateQueries({ queryKey: ['jobs', siteId] }),
      queryClient.invalidateQueries({ queryKey: ['tonight', siteId] }),
    ]);
}

export function useFitModel(siteId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    /** On these logs only, or on all that count. */
    mutationFn: (logIds: string[] | null) =>
      call(fitModel, { params: { siteId }, body: logIds === null ? {} : { logIds }, kept: 'No fit was started.' }),
    onSuccess: refresh,
  });
}

/** Approves or retires a model, with a reason. */
export function useJudgeModel(siteId: string, modelId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: ({ verdict, reason }: { verdict: 'approve' | 'retire'; reason: string }) =>
      call(verdict === 'approve' ? approveModel : retireModel, {
        params: { siteId, modelId },
        body: { reason },
        kept: 'Your reason is still in the field.',
      }),
    onSuccess: refresh,
  });
}
