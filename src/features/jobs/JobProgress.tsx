import type { Job } from '../../../shared/api/jobs.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useCancelJob, useJobs } from './queries.ts';

const states: Record<Job['status'], string> = {
  queued: 'Waiting to start',
  running: 'Running',
  done: 'Done',
  failed: 'Failed',
  cancelled: 'Cancelled',
};

/** How far a piece of background work is, in words and as a bar; it can be cancelled by those who may start it. */
export function JobProgress({ siteId, jobId, mayCancel }: { siteId: string; jobId: string; mayCancel: boolean }) {
  const jobs = useJobs(siteId);
  const cancelling = useCancelJob(siteId);
  const job = jobs.data?.find((candidate) => candidate.id === jobId);
  // The place is kept while the jobs load.
  if (!job) return jobs.isPending ? <div className="h-16" /> : null;
  const open = job.status === 'queued' || job.status === 'running';
  const percent = Math.round(job.progress * 100);
  return (
    <div className="grid max-w-xl gap-1">
      <div className="flex items-baseline justify-between gap-4 text-label">
        <span className="font-bold text-ink">
          {states[job.status]}
          {job.status === 'running' ? `, ${String(percent)}\u00a0%` : ''}
        </span>
        <span className="text-ink2">{job.error ?? job.progressText}</span>
      </div>
      {open ? (
        <progress
          className="progress-bar"
          value={job.progress}
          max={1}
          aria-label={`${job.title}: ${job.progressText}`}
        />
      ) : null}
      {open && mayCancel ? (
        <Button
          look="quiet"
          className="justify-self-start text-label"
          busy={cancelling.isPending}
          busyText="Cancelling…"
          onClick={() => cancelling.mutate(job.id)}
        >
          Cancel
        </Button>
      ) : null}
      {cancelling.error ? <ProblemNotice error={cancelling.error} /> : null}
    </div>
  );
}
