import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { cancelJob, listJobs } from '../../../shared/api/jobs.ts';
import type { Job } from '../../../shared/api/jobs.ts';
import { call } from '../../lib/api-client.ts';

const jobsKey = (siteId: string) => ['jobs', siteId] as const;
const isOpen = (job: Job) => job.status === 'queued' || job.status === 'running';

/** Background work of the site; asked every second while any runs. */
export function useJobs(siteId: string) {
  return useQuery({
    queryKey: jobsKey(siteId),
    queryFn: async ({ signal }) => (await call(listJobs, { params: { siteId }, signal })).jobs,
    refetchInterval: (query) => (query.state.data?.some(isOpen) ? 1000 : false),
  });
}

export function useCancelJob(siteId: string) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (jobId: string) => call(cancelJob, { params: { siteId, jobId }, kept: 'The work goes on.' }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: jobsKey(siteId) }),
  });
}
