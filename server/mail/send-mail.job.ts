import type { EntityManager } from 'typeorm';
import { z } from 'zod';
import type { Dependencies } from '../dependencies.ts';
import { recordOwnAudit } from '../http/audit.ts';
import { PermanentJobError, type JobKind } from '../jobs/queue.ts';
import { MailError, mailSchema, type Mail } from './mailer.ts';

export const mailJobKind = 'mail.send';

/** With the queue's growing pauses about seven and a half hours of trying. */
const attempts = 8;

const payloadSchema = z.object({ mail: mailSchema, notAfter: z.int().nullable() });

export interface MailSpec {
  mail: Mail;
  /** What the list of jobs calls it; no address. */
  title: string;
  siteId: string | null;
  createdBy: string;
  /** Not worth sending from then on, UTC seconds. */
  notAfter?: number;
}

/** Queues a message within the caller's transaction; throws if it could never be sent. Returns the job's id. */
export function enqueueMail(
  { jobs }: Pick<Dependencies, 'jobs'>,
  manager: EntityManager,
  { mail, title, siteId, createdBy, notAfter }: MailSpec,
): Promise<string> {
  return jobs.enqueue(manager, {
    kind: mailJobKind,
    title,
    siteId,
    payload: payloadSchema.parse({ mail, notAfter: notAfter ?? null }),
    createdBy,
    maxAttempts: attempts,
  });
}

/** Sends a message; what the mail server refuses for good, and what has become too late, is not tried again. */
export function makeMailKind({ mailer, clock }: Pick<Dependencies, 'mailer' | 'clock'>): JobKind {
  return {
    retryable: true,
    async run({ job, payload, progress }) {
      const { mail, notAfter } = payloadSchema.parse(payload);
      if (notAfter !== null && clock() >= notAfter) {
        throw new PermanentJobError(`Too late to be of use${job.error === null ? '' : `; before: ${job.error}`}`);
      }
      progress(0, 'Sending');
      try {
        await mailer.send(mail, job.id);
      } catch (error) {
        throw error instanceof MailError && error.permanent ? new PermanentJobError(error.message) : error;
      }
    },
    async settle(manager, job, error) {
      await recordOwnAudit(manager, {
        at: clock(),
        actor: 'the mailer',
        siteId: job.siteId,
        event: 'mail.not-sent',
        subject: job.id,
        detail: { title: job.title, attempts: job.attempts, error },
      });
    },
  };
}
