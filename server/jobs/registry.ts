import type { Dependencies } from '../dependencies.ts';
import { fitJobKind, makeFitKind } from '../features/arrival-models/fit-model.job.ts';
import { visitLogJobs } from '../features/visit-logs/routes.ts';
import type { JobKind } from './queue.ts';

/** Every kind of job: how it is done and what is tidied when it fails. */
export function makeJobKinds(deps: Dependencies): Record<string, JobKind> {
  return { [fitJobKind]: makeFitKind(deps), ...visitLogJobs(deps) };
}
