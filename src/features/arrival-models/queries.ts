import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import {
  approveModel,
  compareModel,
  fitModel,
  getModel,
  getModelComparison,
  listModels,
  retireModel,
} from '../../../shared/api/arrival-models.ts';
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

/** The newest backtest beside the model in use; asked every two seconds while it runs. */
export function useComparison(siteId: string, modelId: string) {
  return useQuery({
    queryKey: [...modelsKey(siteId), modelId, 'comparison'],
    queryFn: ({ signal }) => call(getModelComparison, { params: { siteId, modelId }, signal }),
    refetchInterval: (query) => (query.state.data?.comparison?.status === 'running' ? 2000 : false),
  });
}

export function useCompare(siteId: string, modelId: string) {
  const refresh = useRefresh(siteId);
  return useMutation({
    mutationFn: () =>
      call(compareModel, { params: { siteId, modelId }, body: {}, kept: 'The candidate stays as it is.' }),
    onSuccess: refresh,
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
