import type { JobSpec } from '../../jobs/queue.ts';

export const refreshJobKind = 'arrival-model.refresh-level';

/** The job that works the level of a site's model in use out anew, from the data that count now. */
export function levelJob(siteId: string): JobSpec {
  return {
    kind: refreshJobKind,
    title: 'Move the level of the model in use on',
    siteId,
    payload: { siteId },
    createdBy: 'the job queue',
  };
}
