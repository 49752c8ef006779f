import { setTimeout as pause } from 'node:timers/promises';
import type { EntityManager } from 'typeorm';
import { In, LessThanOrEqual, MoreThan, Not } from 'typeorm';
import type { Clock } from '../clock.ts';
import type { Database } from '../database/database.ts';
import { databaseFaultOf } from '../database/database-fault.ts';
import { newId } from '../database/new-id.ts';
import { Job } from '../entities/Job.ts';
import type { Logger } from '../log.ts';

/** What a handler is given besides what it closed over. */
export interface JobContext {
  job: Job;
  payload: unknown;
  /** Aborts when the job is cancelled or the server stops. */
  signal: AbortSignal;
  /** Tells how far it is: a share 0..1 and a few words. Written at most twice a second. */
  progress: (share: number, text: string) => void;
}

export type JobHandler = (context: JobContext) => Promise<void>;

/** Tidies up after a job that ended without success, in the same transaction. */
export type JobSettler = (manager: EntityManager, job: Job, error: string) => Promise<void>;

/** A kind of job: how it is done, and what is left to tidy when it fails for good or is cancelled. */
export interface JobKind {
  run: JobHandler;
  /** Never two at once, so that long background work leaves a place for what somebody waits for. */
  oneAtATime?: boolean;
  settle?: JobSettler;
  /** True if a failed one may be tried again by hand: nothing was tidied away that it needs. */
  retryable?: boolean;
}

/** A failure that a retry cannot mend. */
export class PermanentJobError extends Error {
  override name = 'PermanentJobError';
}

/** A failure after which a retry is wanted at a time of its own, rather than after the queue's growing pause. */
export class RetryJobError extends Error {
  override name = 'RetryJobError';
  readonly afterSeconds: number;

  constructor(message: string, afterSeconds: number) {
    super(message);
    this.afterSeconds = afterSeconds;
  }
}

export interface JobSpec {
  kind: string;
  title: string;
  siteId: string | null;
  payload: unknown;
  createdBy: string;
  /** Not before this instant; at once if not stated. */
  runAfter?: number;
  maxAttempts?: number;
}

const leaseSeconds = 60;
const pollMilliseconds = 1000;

/**
 * Background work in the database: it survives a restart, is retried with growing pauses, shows its
 * progress and can be cancelled. One process works the queue.
 */
export class JobQueue {
  private readonly database: Database;
  private readonly clock: Clock;
  private readonly logger: Logger;
  private readonly width: number;
  private kinds: Record<string, JobKind> = {};
  private readonly running = new Map<string, { kind: string; abort: AbortController; ended: Promise<void> }>();
  private timer: NodeJS.Timeout | null = null;
  private stopped = true;
  private looking: Promise<void> | null = null;

  constructor(database: Database, clock: Clock, logger: Logger, width = 2) {
    this.database = database;
    this.clock = clock;
    this.logger = logger;
    this.width = width;
  }

  /** Adds a job within the caller's transaction; it starts once that is committed. */
  async enqueue(manager: EntityManager, spec: JobSpec): Promise<string> {
    const now = this.clock();
    const id = newId();
    await manager.insert(Job, {
      id,
      kind: spec.kind,
      title: spec.title,
      siteId: spec.siteId,
      payload: JSON.stringify(spec.payload),
      status: 'queued',
      attempts: 0,
      maxAttempts: spec.maxAttempts ?? 3,
      runAfter: spec.runAfter ?? now,
      leaseUntil: null,
      progress: 0,
      progressText: 'Waiting to start',
      error: null,
      createdBy: spec.createdBy,
      createdAt: now,
      startedAt: null,
      endedAt: null,
    });
    setImmediate(() => {
      this.wake();
    });
    return id;
  }

  /** Begins to work. Jobs that a dead process left running are queued again, or failed when their attempts are used up. */
  async start(kinds: Record<string, JobKind>): Promise<void> {
    this.kinds = kinds;
    await this.database.write(async (manager) => {
      for (const job of await manager.findBy(Job, { status: 'running' })) {
        if (job.attempts < job.maxAttempts) {
          const change = { status: 'queued' as const, leaseUntil: null, progressText: 'Queued again after a restart' };
          await manager.update(Job, { id: job.id }, change);
        } else {
          await this.endBadly(manager, job, 'failed', 'The server stopped while this ran.');
        }
      }
    });
    this.stopped = false;
    this.timer = setInterval(() => {
      this.wake();
    }, pollMilliseconds);
    this.wake();
  }

  /** Ends what runs (it is queued again, for the next start) and waits for it. */
  async stop(): Promise<void> {
    this.stopped = true;
    if (this.timer) clearInterval(this.timer);
    await this.looking;
    for (const { abort } of this.running.values()) abort.abort();
    await Promise.all([...this.running.values()].map(({ ended }) => ended));
  }

  /**
   * Cancels a job that waits or runs; false if it had ended.
   * @param alongside what belongs to the cancelling (its audit row), in the same transaction
   */
  async cancel(jobId: string, alongside?: (manager: EntityManager) => Promise<void>): Promise<boolean> {
    const cancelled = await this.database.write(async (manager) => {
      const job = await manager.findOneBy(Job, { id: jobId, status: In(['queued', 'running']) });
      if (!job) return false;
      await this.endBadly(manager, job, 'cancelled', 'Cancelled.');
      await alongside?.(manager);
      return true;
    });
    if (cancelled) this.running.get(jobId)?.abort.abort();
    return cancelled;
  }

  /** True if a failed job of this kind may be tried again by hand. */
  mayRetry(kind: string): boolean {
    return (this.kinds[kind] as JobKind | undefined)?.retryable ?? false;
  }

  /**
   * Queues a failed job again, with all its attempts; false if it has not failed or its kind cannot be tried again.
   * @param alongside what belongs to it (its audit row), in the same transaction
   */
  async retry(jobId: string, alongside: (manager: EntityManager) => Promise<void>): Promise<boolean> {
    const queued = await this.database.write(async (manager) => {
      const job = await manager.findOneBy(Job, { id: jobId, status: 'failed' });
      if (!job || !this.mayRetry(job.kind)) return false;
      const fresh = { status: 'queued' as const, attempts: 0, runAfter: this.clock(), endedAt: null, progress: 0 };
      await manager.update(Job, { id: jobId }, { ...fresh, progressText: 'Waiting to start again' });
      await alongside(manager);
      return true;
    });
    if (queued) this.wake();
    return queued;
  }

  /** Waits until nothing is queued for now and nothing runs (for tests and the demo's start). */
  async idle(): Promise<void> {
    for (;;) {
      const waiting = await this.database.read.countBy(Job, [
        { status: 'running' },
        { status: 'queued', runAfter: LessThanOrEqual(this.clock()) },
      ]);
      if (waiting === 0 && this.running.size === 0) return;
      this.wake();
      await new Promise((resolve) => setTimeout(resolve, 25));
    }
  }

  private wake(): void {
    if (this.stopped || this.looking) return;
    this.looking = this.take()
      .catch((error: unknown) => {
        this.logger.error({ err: error }, 'the job queue could not be read');
      })
      .finally(() => {
        this.looking = null;
      });
  }

  private async take(): Promise<void> {
    while (!this.stopped && this.running.size < this.width) {
      const now = this.clock();
      const alone = [...this.running.values()]
        .map(({ kind }) => kind)
        .filter((kind) => (this.kinds[kind] as JobKind | undefined)?.oneAtATime);
      const waiting = { status: 'queued', ...(alone.length > 0 ? { kind: Not(In(alone)) } : {}) } as const;
      const next = await this.database.read.findOne(Job, {
        // What was asked for at a time to come is from before the clock was set back: it need not wait for that again.
        where: [
          { ...waiting, runAfter: LessThanOrEqual(now) },
          { ...waiting, createdAt: MoreThan(now + leaseSeconds) },
        ],
        order: { runAfter: 'ASC', createdAt: 'ASC' },
      });
      if (!next) return;
      const claimed = await this.database.write((manager) =>
        manager.update(
          Job,
          { id: next.id, status: 'queued' },
          {
            status: 'running',
            attempts: next.attempts + 1,
            startedAt: now,
            leaseUntil: now + leaseSeconds,
            progressText: 'Started',
          },
        ),
      );
      if (claimed.affected !== 1) continue;
      const abort = new AbortController();
      const job: Job = Object.assign(next, { attempts: next.attempts + 1 });
      const ended = this.work(job, abort)
        .catch((error: unknown) => {
          this.logger.error({ err: error, jobId: job.id }, 'a job was left as it stood');
        })
        .finally(() => {
          this.running.delete(job.id);
          this.wake();
        });
      this.running.set(job.id, { kind: job.kind, abort, ended });
    }
  }

  private async work(job: Job, abort: AbortController): Promise<void> {
    let latest: { progress: number; progressText: string } | null = null;
    const keep = setInterval(() => {
      const change = { leaseUntil: this.clock() + leaseSeconds, ...latest };
      latest = null;
      this.database
        .write((manager) => manager.update(Job, { id: job.id, status: 'running' }, change))
        .catch((error: unknown) => {
          this.logger.warn({ err: error, jobId: job.id }, 'progress of a job could not be written');
        });
    }, 500);
    let writeEnd: () => Promise<void>;
    try {
      const kind = this.kinds[job.kind] as JobKind | undefined;
      if (!kind) throw new PermanentJobError(`No handler for jobs of kind ${job.kind}.`);
      await kind.run({
        job,
        payload: JSON.parse(job.payload) as unknown,
        signal: abort.signal,
        progress: (share, text) => {
          latest = { progress: Math.min(1, Math.max(0, share)), progressText: text };
        },
      });
      writeEnd = () => this.end(job, { status: 'done', progress: 1, progressText: 'Done', error: null });
    } catch (error) {
      if (!abort.signal.aborted) this.logger.warn({ err: error, jobId: job.id, kind: job.kind }, 'a job failed');
      writeEnd = () => this.fail(job, abort, error);
    } finally {
      clearInterval(keep);
    }
    await this.untilWritten(job, writeEnd);
  }

  /** Writes a job's end, again and again while the database takes nothing (no room, say); a stopping server leaves it to the next start. */
  private async untilWritten(job: Job, write: () => Promise<void>): Promise<void> {
    for (let told = false; ;) {
      try {
        await write();
        return;
      } catch (error) {
        if (!databaseFaultOf(error)) throw error;
        if (!told) this.logger.error({ err: error, jobId: job.id }, 'the end of a job could not be written');
        told = true;
        if (this.stopped) return;
        await pause(pollMilliseconds);
      }
    }
  }

  private async fail(job: Job, abort: AbortController, error: unknown): Promise<void> {
    const message = error instanceof Error ? error.message : String(error);
    if (abort.signal.aborted) {
      // Cancelled rows already say so and are left alone. What a stopping server ended was no failed attempt.
      await this.end(job, {
        status: 'queued',
        attempts: job.attempts - 1,
        progressText: 'Waiting for the server to start again',
      });
      return;
    }
    if (error instanceof PermanentJobError || job.attempts >= job.maxAttempts) {
      await this.database.write(async (manager) => {
        if (await manager.existsBy(Job, { id: job.id, status: 'running' })) {
          await this.endBadly(manager, job, 'failed', message);
        }
      });
      return;
    }
    await this.end(job, {
      status: 'queued',
      runAfter: this.clock() + (error instanceof RetryJobError ? error.afterSeconds : 5 * 4 ** (job.attempts - 1)),
      progressText: 'Failed, will be tried again',
      error: message,
    });
  }

  private async endBadly(
    manager: EntityManager,
    job: Job,
    status: 'failed' | 'cancelled',
    error: string,
  ): Promise<void> {
    const progressText = status === 'failed' ? 'Failed' : 'Cancelled';
    await manager.update(Job, { id: job.id }, { status, error, progressText, leaseUntil: null, endedAt: this.clock() });
    const kind = this.kinds[job.kind] as JobKind | undefined;
    await kind?.settle?.(manager, job, error);
  }

  private async end(job: Job, change: Partial<Job>): Promise<void> {
    const ended = change.status === 'queued' ? {} : { endedAt: this.clock() };
    await this.database.write((manager) =>
      manager.update(Job, { id: job.id, status: 'running' }, { ...change, ...ended, leaseUntil: null }),
    );
  }
}
