import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

export const job = z.object({
  id,
  kind: z.string(),
  title: z.string(),
  status: z.enum(['queued', 'running', 'done', 'failed', 'cancelled']),
  /** Share done, 0..1. */
  progress: z.number().min(0).max(1),
  progressText: z.string(),
  error: z.string().nullable(),
  createdAt: instant,
  endedAt: instant.nullable(),
});
export type Job = z.infer<typeof job>;

export const listJobs = defineContract({
  id: 'listJobs',
  method: 'get',
  path: '/api/sites/:siteId/jobs',
  access: 'arrival-model:read',
  summary: 'Background work of the site, newest first: what runs, what ran, what failed.',
  params: siteParams,
  reply: z.object({ jobs: z.array(job) }),
});

export const cancelJob = defineContract({
  id: 'cancelJob',
  method: 'post',
  path: '/api/sites/:siteId/jobs/:jobId/cancel',
  access: 'arrival-model:fit',
  summary: 'Cancel a job that waits or runs.',
  params: siteParams.extend({ jobId: id }),
  reply: job,
});
