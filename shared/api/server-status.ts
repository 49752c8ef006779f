import { z } from 'zod';
import { id, instant } from './common.ts';
import { defineContract } from './contract.ts';

const path = '/api/server-status';
const access = 'installation:administer';

export const failedJob = z.object({
  id,
  kind: z.string(),
  title: z.string(),
  siteName: z.string().nullable(),
  error: z.string().nullable(),
  attempts: z.int(),
  endedAt: instant.nullable(),
  /** It may be tried again from here. */
  mayRetry: z.boolean(),
});
export type FailedJob = z.infer<typeof failedJob>;

export const serverStatus = z.object({
  now: instant,
  startedAt: instant,
  softwareVersion: z.string(),
  engineVersion: z.string(),
  nodeVersion: z.string(),
  migrations: z.object({ done: z.int(), newest: z.string() }),
  database: z.object({ bytes: z.int(), logBytes: z.int() }),
  /** Of the disk that holds the data folder. */
  disk: z.object({ freeBytes: z.number(), totalBytes: z.number() }),
  /** Longest time within the last minute or so for which the server could do nothing else, milliseconds. */
  longestStallMilliseconds: z.number(),
  memoryBytes: z.int(),
  queue: z.object({
    queued: z.int(),
    running: z.int(),
    /** Since when the oldest job that could run has waited; null: none waits. */
    oldestWaitsSince: instant.nullable(),
    /** Newest first, 50 at most, of the last 30 days. */
    failed: z.array(failedJob),
  }),
  backups: z.object({
    folder: z.string(),
    /** 0: none by the clock. */
    everyHours: z.int(),
    keep: z.int(),
    /** A backup waits or runs now. */
    underWay: z.boolean(),
    /** Newest first. */
    files: z.array(z.object({ name: z.string(), madeAt: instant, bytes: z.int(), rows: z.int() })),
  }),
  mail: z.object({
    /** A mail server is set. */
    set: z.boolean(),
    from: z.string(),
    lastSentAt: instant.nullable(),
    waiting: z.int(),
    lastFailure: z.object({ at: instant, error: z.string() }).nullable(),
  }),
});
export type ServerStatus = z.infer<typeof serverStatus>;

export const getServerStatus = defineContract({
  id: 'getServerStatus',
  method: 'get',
  path,
  access,
  summary: 'Version, schema, disk, background work, backups and mail of the server.',
  reply: serverStatus,
});

export const askBackup = defineContract({
  id: 'askBackup',
  method: 'post',
  path: `${path}/backups`,
  access,
  summary: 'Make a backup now, in the background.',
  status: 202,
  reply: z.object({ jobId: id }),
});

export const retryJob = defineContract({
  id: 'retryJob',
  method: 'post',
  path: `${path}/jobs/:jobId/retry`,
  access,
  summary: 'Try a failed job again, where its kind allows it.',
  params: z.object({ jobId: id }),
  status: 204,
  reply: z.null(),
});

export const sendTestMail = defineContract({
  id: 'sendTestMail',
  method: 'post',
  path: `${path}/test-mail`,
  access,
  summary: 'Send a message to the address of the person who asks, at once.',
  reply: z.object({ to: z.string() }),
});

export const getMetrics = defineContract({
  id: 'getMetrics',
  method: 'get',
  path: '/metrics',
  access: 'public',
  summary: 'Figures in the Prometheus text format, for whoever bears METRICS_TOKEN; 404 where none is set.',
  reply: z.string(),
  replyType: 'text/plain',
});
