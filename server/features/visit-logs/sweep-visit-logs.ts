import { In } from 'typeorm';
import type { Dependencies } from '../../dependencies.ts';
import { Job } from '../../entities/Job.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { sweepChecked } from './checked-file.ts';
import type { ImportPayload } from './import-payload.ts';

/** Checks whose file a load still needs. */
export async function checksInUse(deps: Dependencies): Promise<Set<string>> {
  const logs = await deps.database.read.findBy(VisitLog, { status: 'loading' });
  const jobs = await deps.database.read.findBy(Job, { id: In(logs.flatMap((log) => log.jobId ?? [])) });
  return new Set(jobs.map((job) => (JSON.parse(job.payload) as ImportPayload).checkId));
}

/** To be run once at the start, before uploads can begin: deletes what half-sent uploads and forgotten checks left. */
export async function sweepVisitLogs(deps: Dependencies): Promise<void> {
  await sweepChecked(deps.config.dataDir, await checksInUse(deps), { starting: true });
}
