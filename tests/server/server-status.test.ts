import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import type { ServerStatus } from '../../shared/api/server-status.ts';
import { startMailbox } from '../../demo/mailbox.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Job } from '../../server/entities/Job.ts';
import { migrations } from '../../server/database/migrations/index.ts';
import { buildPerson } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const token = 'a-token-for-figures-0123456789abcdef';
let server: TestServer;
let admin: SignedIn;

beforeAll(async () => {
  server = await openTestServer({ config: { metricsToken: token, smtpUrl: 'smtp://127.0.0.1:9' } });
  admin = await server.signedInAs((await buildPerson(server.deps.database, [{ role: 'administrator' }])).id);
});
afterAll(() => server.close());

const status = async () => (await admin.get('/api/server-status')).body as ServerStatus;
async function addJob(id: string, kind: string, more: Partial<Job> = {}): Promise<void> {
  const { now } = server.time;
  await server.deps.database.write((manager) =>
    manager.insert(Job, {
      ...{ id, kind, title: 'Brief', payload: '{}', status: 'failed', attempts: 3, maxAttempts: 3, runAfter: now },
      ...{ progress: 0, progressText: '', error: 'It broke', createdBy: 'x', createdAt: now, endedAt: now },
      ...more,
    }),
  );
}

describe('the status', () => {
  test('tells version, schema, disk, work, backups and mail', async () => {
    const found = await status();
    expect(found.migrations).toEqual({ done: migrations.length, newest: migrations.at(-1)?.name });
    expect(found.database.bytes + found.database.logBytes).toBeGreaterThan(100_000);
    expect(found.disk.totalBytes).toBeGreaterThan(found.disk.freeBytes);
    expect(found.queue).toEqual({ queued: 0, running: 0, oldestWaitsSince: null, failed: [] });
    expect(found.backups).toMatchObject({ everyHours: 0, keep: 3, underWay: false, files: [] });
    expect(found.mail).toMatchObject({ set: true, lastSentAt: null, waiting: 0, lastFailure: null });
  });

  test('lists failed work; what can be tried again is, with its attempts anew', async () => {
    await addJob('fit', 'arrival-model.fit');
    await server.workJobs();
    await addJob('mail', 'mail.send', { payload: JSON.stringify({ wrong: true }) });
    await addJob('old', 'mail.send', { endedAt: server.time.now - 31 * 86_400 });
    const { failed } = (await status()).queue;
    expect(failed.map(({ id, mayRetry }) => [id, mayRetry]).toSorted()).toEqual([
      ['fit', false],
      ['mail', true],
    ]);
    expect((await admin.send('post', '/api/server-status/jobs/fit/retry')).status).toBe(409);
    expect((await admin.send('post', '/api/server-status/jobs/none/retry')).status).toBe(404);
    expect((await admin.send('post', '/api/server-status/jobs/mail/retry')).status).toBe(204);
    expect(await server.deps.database.read.countBy(AuditEvent, { event: 'job.tried-again', subject: 'mail' })).toBe(1);
    await expect
      .poll(async () => (await server.deps.database.read.findOneByOrFail(Job, { id: 'mail' })).error)
      .not.toBe('It broke');
  });

  test('a backup is made when asked for, once at a time, and is listed', async () => {
    expect((await admin.send('post', '/api/server-status/backups')).status).toBe(202);
    expect((await admin.send('post', '/api/server-status/backups')).status).toBe(409);
    await server.workJobs();
    const { files } = (await status()).backups;
    expect(files).toHaveLength(1);
    expect(files[0].rows).toBeGreaterThan(3);
  });
});

describe('a test mail', () => {
  test('that cannot be sent says why', async () => {
    const reply = await admin.send('post', '/api/server-status/test-mail');
    expect(reply.status).toBe(502);
    expect((reply.body as Problem).detail).toContain('cannot be reached');
  });

  test('arrives at the address of whoever asked', async () => {
    const mailbox = await startMailbox({ smtpPort: 0, httpPort: 0 });
    const own = await openTestServer({ config: { smtpUrl: mailbox.smtpUrl } });
    try {
      const person = await buildPerson(own.deps.database, [{ role: 'administrator' }]);
      const reply = await (await own.signedInAs(person.id)).send('post', '/api/server-status/test-mail');
      expect(reply.body).toEqual({ to: person.email });
      expect(mailbox.messages()).toHaveLength(1);
    } finally {
      await own.close();
      await mailbox.close();
    }
  });
});

describe('figures in the Prometheus text format', () => {
  test('are told to the bearer of the token alone', async () => {
    const ask = (authorization?: string) => {
      const request = server.nobody().get('/metrics');
      return authorization === undefined ? request : request.set('authorization', authorization);
    };
    expect((await ask()).status).toBe(401);
    expect((await ask(`Bearer ${token}x`)).status).toBe(401);
    await admin.get('/api/sites/some-site');
    const reply = await ask(`Bearer ${token}`);
    expect(reply.status).toBe(200);
    expect(reply.headers['content-type']).toContain('text/plain; version=0.0.4');
    expect(reply.text).toMatch(/^shoalmark_jobs\{status="failed"\} \d+$/m);
    // Routes as they are written: no id becomes a label.
    expect(reply.text).toMatch(
      /shoalmark_request_duration_seconds_count\{method="GET",route="\/api\/sites\/:siteId",status="404"\} 1/,
    );
    expect(reply.text).not.toContain('some-site');
    expect(reply.text).not.toContain(token);
  });

  test('are not there where no token is set', async () => {
    const plain = await openTestServer();
    expect((await plain.nobody().get('/metrics').set('authorization', 'Bearer ')).status).toBe(404);
    await plain.close();
  });
});
