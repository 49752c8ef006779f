import { afterEach, describe, expect, test } from 'vitest';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Brief } from '../../server/entities/Brief.ts';
import { BriefDelivery } from '../../server/entities/BriefDelivery.ts';
import { BriefRecipient } from '../../server/entities/BriefRecipient.ts';
import { Job } from '../../server/entities/Job.ts';
import { Membership } from '../../server/entities/Membership.ts';
import { putOnItsWay } from '../../server/features/briefs/put-on-its-way.ts';
import { LineError, openMailLine } from '../../server/mail/mail-line.ts';
import { buildBrief, buildRecipients } from '../support/build-brief.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { headerOf, startMailServer, type MailServerFaults, type TestMailServer } from '../support/start-mail-server.ts';
import { openTestServer, type TestServer } from '../support/test-server.ts';

/*
 * The mail server's own log is the judge of what was delivered. Sources: RFC 5321, 4.1.1.4 (a message is not delivered before
 * the dot), 4.2.1 (4yz for now, 5yz for good), 4.2.5 and 6.1 (without an answer the message stays with the sender); RFC 1047
 * (the duplicate that follows a cut between the dot and the answer); RFC 2369 and RFC 8058 (list headers).
 */
let server: TestServer;
let mail: TestMailServer;
let built: BuiltSite;
let brief: Brief;

afterEach(async () => {
  await server.close();
  await mail.close();
});

const addresses = (count: number) => Array.from({ length: count }, (_, i) => `reader${String(i)}@example.org`);

async function prepare(to: readonly string[], faults: MailServerFaults = {}): Promise<BriefRecipient[]> {
  mail = await startMailServer(faults);
  server = await openTestServer({
    config: { smtpUrl: mail.smtpUrl, mailFrom: 'Shoalmark <brief@farrowmere.example>' },
  });
  built = await buildSite(server.deps.database);
  brief = await buildBrief(server.deps.database, built);
  return buildRecipients(server.deps.database, built, to);
}

const send = () => server.deps.database.write((manager) => putOnItsWay(server.deps, manager, brief, 'Test'));
const deliveries = () =>
  server.deps.database.read.find(BriefDelivery, { where: { briefId: brief.id }, order: { position: 'ASC' } });
const sendJob = () => server.deps.database.read.findOneByOrFail(Job, { kind: 'brief.send' });
const stateOf = async () => (await server.deps.database.read.findOneByOrFail(Brief, { id: brief.id })).state;

/** Works the queue, moving the clock on to each retry, until nothing waits or an instant is reached. */
async function workUntil(end: number): Promise<void> {
  for (;;) {
    await server.workJobs();
    const job = await sendJob();
    if (job.status !== 'queued' || job.runAfter > end) return;
    server.time.now = Math.max(server.time.now + 1, job.runAfter);
  }
}

describe('a brief', () => {
  test('goes to each recipient once, in order, alone, over one connection', async () => {
    const to = addresses(20);
    await prepare(to);
    expect(await send()).toBe(20);
    await server.workJobs();
    expect(mail.taken.map((each) => each.to)).toEqual(to.map((address) => [address]));
    expect(mail.connections()).toBe(1);
    for (const { raw, to: envelope } of mail.taken) {
      expect(headerOf(raw, 'To')).toBe(envelope[0]);
      for (const other of to) if (other !== envelope[0]) expect(raw).not.toContain(other);
      expect(raw).not.toMatch(/^b?cc:/im);
    }
    const rows = await deliveries();
    expect(rows.every(({ state, attempts }) => state === 'sent' && attempts === 1)).toBe(true);
    expect(rows[0].lastAnswer).toMatch(/^250/);
    expect(rows[0].lastAnswer).not.toContain('@');
    expect(mail.taken.map(({ messageId }) => messageId)).toEqual(
      rows.map(({ messageId }) => `<${messageId}@farrowmere.example>`),
    );
    expect(await stateOf()).toBe('sent');
    await expect(server.deps.database.read.existsBy(AuditEvent, { event: 'brief.sent' })).resolves.toBe(true);
  });

  test('carries list headers, a link of each recipient’s own in both parts, and its pictures', async () => {
    await prepare(addresses(2));
    await send();
    await server.workJobs();
    const links = mail.taken.map(({ raw }) => headerOf(raw, 'List-Unsubscribe'));
    for (const link of links) expect(link).toMatch(/^<http:\/\/127\.0\.0\.1:4310\/mail\/unsubscribe\/[\w.-]+>$/);
    expect(links[0]).not.toBe(links[1]);
    const [{ raw }] = mail.taken;
    expect(headerOf(raw, 'List-Unsubscribe-Post')).toBe('List-Unsubscribe=One-Click');
    expect(headerOf(raw, 'Auto-Submitted')).toBe('auto-generated');
    expect(headerOf(raw, 'Content-Type')).toMatch(/^multipart\/alternative/);
    expect(raw).toMatch(/Content-Id: <a>/i);
    const secret = links[0].slice(1, -1);
    const plain = raw.replace(/=\r\n/g, '').replace(/=3D/g, '=');
    expect(plain.split(secret).length - 1).toBe(3);
    expect(raw).not.toContain('{{unsubscribe}}');
  });

  test('to an address that is refused for good is shown as refused, without the address; the others get theirs', async () => {
    const refuse = 'reader1@example.org';
    await prepare(addresses(4), {
      onRecipient: (address) => (address === refuse ? { code: 550, text: `No mailbox ${refuse} here` } : null),
    });
    await send();
    await server.workJobs();
    const rows = await deliveries();
    expect(rows.map(({ state }) => state)).toEqual(['sent', 'refused', 'sent', 'sent']);
    expect(rows[1].lastAnswer).toContain('550');
    expect(rows[1].lastAnswer).not.toContain('@');
    expect(await stateOf()).toBe('sent');
  });

  test('to an address that is busy is tried again later and holds nobody up', async () => {
    let tries = 0;
    await prepare(addresses(3), {
      onRecipient: (address) =>
        address === 'reader0@example.org' && (tries += 1) < 3 ? { code: 450, text: 'Later' } : null,
    });
    await send();
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual(['reader1@example.org', 'reader2@example.org']);
    expect(await stateOf()).toBe('sending');
    await workUntil(server.time.now + 3600);
    expect(mail.taken.map(({ to }) => to[0])).toEqual([
      'reader1@example.org',
      'reader2@example.org',
      'reader0@example.org',
    ]);
    expect((await deliveries())[0]).toMatchObject({ state: 'sent', attempts: 3 });
  });
});

test('the mail server down for an hour: no storm, then everybody in order, once', async () => {
  const to = addresses(30);
  await prepare(to);
  await send();
  const { port } = mail;
  await mail.close();
  const begun = server.time.now;
  await workUntil(begun + 3600);
  const tried = (await sendJob()).attempts;
  // One attempt at a time, ever more rarely: not one for each recipient.
  expect(tried).toBeGreaterThan(3);
  expect(tried).toBeLessThan(15);
  expect((await deliveries()).filter(({ attempts }) => attempts > 0)).toHaveLength(1);
  mail = await startMailServer({ port });
  await workUntil(begun + 3600 + 900);
  expect(mail.taken.map((each) => each.to[0])).toEqual(to);
  expect(server.time.now - begun).toBeLessThan(3600 + 601);
  expect(await stateOf()).toBe('sent');
});

describe('a recipient', () => {
  test('who is removed, or unsubscribes, between approval and sending gets nothing', async () => {
    const [first, second] = await prepare(addresses(3));
    await send();
    await server.deps.database.write(async (manager) => {
      await manager.update(BriefRecipient, { id: first.id }, { removedAt: server.time.now });
      await manager.update(BriefRecipient, { id: second.id }, { unsubscribedAt: server.time.now });
    });
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual(['reader2@example.org']);
    const rows = await deliveries();
    expect(rows.map(({ state }) => state)).toEqual(['left out', 'left out', 'sent']);
    expect(rows[0].lastAnswer).toContain('Removed');
    expect(rows[1].lastAnswer).toContain('Unsubscribed');
  });

  test('who is removed while the message is on the line gets nothing: the dot is not sent', async () => {
    const [only, next] = await prepare(addresses(2), {
      onRecipient: () => {
        void server.deps.database.write((manager) =>
          manager.update(BriefRecipient, { id: only.id }, { removedAt: server.time.now }),
        );
        return null;
      },
    });
    await send();
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual([next.address]);
    expect((await deliveries()).map(({ state }) => state)).toEqual(['left out', 'sent']);
  });

  test('whose role at the site has ended gets nothing', async () => {
    await prepare([]);
    const { database } = server.deps;
    const role = { role: 'executive' as const, siteId: built.site.id };
    const stays = await buildPerson(database, [role]);
    const goes = await buildPerson(database, [role]);
    await buildRecipients(database, built, [stays.email], { personId: stays.id });
    await buildRecipients(database, built, [goes.email], { personId: goes.id });
    await send();
    await database.write((manager) => manager.delete(Membership, { personId: goes.id }));
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual([stays.email]);
  });

  test('of a brief of two sites must read both', async () => {
    await prepare([]);
    const { database } = server.deps;
    const other = await buildSite(database);
    await database.write((manager) =>
      manager.update(Brief, { id: brief.id }, { siteIds: [built.site.id, other.site.id] }),
    );
    const one = await buildPerson(database, [{ role: 'executive', siteId: built.site.id }]);
    const both = await buildPerson(database, [
      { role: 'executive', siteId: built.site.id },
      { role: 'executive', siteId: other.site.id },
    ]);
    await buildRecipients(database, built, [one.email], { personId: one.id });
    await buildRecipients(database, built, [both.email], { personId: both.id });
    await send();
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual([both.email]);
  });
});

describe('stopped in between', () => {
  test('before the dot: nobody is sent anything twice, and the message in hand goes out at the next start', async () => {
    const to = addresses(6);
    let stop: Promise<void> | undefined;
    await prepare(to, {
      onRecipient: (address) => {
        if (address === to[2] && stop === undefined) stop = server.deps.jobs.stop();
        return null;
      },
    });
    await send();
    await server.restartJobs();
    await expect.poll(() => stop !== undefined, { timeout: 20_000 }).toBe(true);
    await stop;
    expect(mail.taken.length).toBeLessThan(6);
    await server.restartJobs();
    await server.deps.jobs.idle();
    expect(mail.taken.map((each) => each.to[0]).toSorted()).toEqual(to);
    expect(new Set(mail.taken.map(({ messageId }) => messageId)).size).toBe(6);
  });

  test('found as being handed over at a start: not sent again by itself, shown as not known, and sent again on a press under the same Message-ID', async () => {
    await prepare(addresses(3));
    await send();
    const [first] = await deliveries();
    await server.deps.database.write((manager) =>
      manager.update(BriefDelivery, { id: first.id }, { state: 'handing over', attempts: 1 }),
    );
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual(['reader1@example.org', 'reader2@example.org']);
    expect((await deliveries())[0]).toMatchObject({
      state: 'not known',
      lastAnswer: expect.stringContaining('same Message-ID'),
    });
    const person = await buildPerson(server.deps.database, [{ role: 'operations', siteId: built.site.id }]);
    const client = await server.signedInAs(person.id);
    const path = `/api/sites/${built.site.id}/briefs/${brief.id}/deliveries`;
    const again = await client.send('post', `${path}/${first.id}/resending`);
    expect(again.status).toBe(202);
    await server.workJobs();
    expect(mail.taken[2]).toMatchObject({
      to: ['reader0@example.org'],
      messageId: `<${first.messageId}@farrowmere.example>`,
    });
    expect(await stateOf()).toBe('sent');
    expect((await client.send('post', `${path}/${first.id}/resending`)).status).toBe(409);
  });

  test('by the mail server after the dot, without an answer: sent again under the same Message-ID', async () => {
    let cut = false;
    await prepare(addresses(2), {
      onMessage: () => {
        if (cut) return 'take';
        cut = true;
        return 'take and hang up';
      },
    });
    await send();
    await server.workJobs();
    expect((await deliveries())[0]).toMatchObject({
      state: 'waiting',
      attempts: 1,
      lastAnswer: expect.stringContaining('may have taken it'),
    });
    await workUntil(server.time.now + 600);
    expect(mail.taken.map(({ to }) => to[0])).toEqual([
      'reader0@example.org',
      'reader0@example.org',
      'reader1@example.org',
    ]);
    expect(mail.taken[0].messageId).toBe(mail.taken[1].messageId);
  });
});

test('given up after all attempts is shown as such, and in the audit trail', async () => {
  await prepare(addresses(2));
  await send();
  await server.deps.database.write((manager) => manager.update(Job, { kind: 'brief.send' }, { maxAttempts: 1 }));
  await mail.close();
  await server.workJobs();
  expect((await deliveries()).map(({ state }) => state)).toEqual(['given up', 'given up']);
  expect(await stateOf()).toBe('sent');
  await expect(server.deps.database.read.existsBy(AuditEvent, { event: 'brief.given-up' })).resolves.toBe(true);
});

describe('the line to the mail server', () => {
  const message = {
    id: 'm1',
    to: 'a@h.example',
    subject: 'Brief',
    text: 'Text',
    html: null,
    pictures: [],
    unsubscribeUrl: null,
  };

  test.each([
    ['a header in the subject', { subject: 'Brief\r\nBcc: all@h.example' }],
    ['a second recipient', { to: 'a@h.example, b@h.example' }],
    ['a header in the address', { to: 'a@h.example\r\nBcc: b@h.example' }],
  ])('refuses %s and sends nothing', async (_, change) => {
    await prepare([]);
    const line = await openMailLine({ smtpUrl: mail.smtpUrl, mailFrom: 'x@h.example' });
    const sending = line.send({ ...message, ...change }, () => Promise.resolve());
    await expect(sending).rejects.toMatchObject({ name: 'LineError', fault: 'refused' });
    line.close();
    expect(mail.taken).toHaveLength(0);
  });

  test('delivers nothing when the end of the message is held back', async () => {
    await prepare([]);
    const line = await openMailLine({ smtpUrl: mail.smtpUrl, mailFrom: 'x@h.example' });
    await expect(line.send(message, () => Promise.reject(new Error('no')))).rejects.toThrow('no');
    await new Promise((resolve) => setTimeout(resolve, 50));
    expect(mail.taken).toHaveLength(0);
  });

  test('writes an internationalised domain as mail servers know it', async () => {
    await prepare([]);
    const line = await openMailLine({ smtpUrl: mail.smtpUrl, mailFrom: 'x@h.example' });
    await line.send({ ...message, to: 'leitung@klinik-münchen.example' }, () => Promise.resolve());
    line.close();
    // The ASCII form is what Python 3's idna codec gives.
    expect(headerOf(mail.taken[0].raw, 'To')).toBe('leitung@xn--klinik-mnchen-3ob.example');
  });

  test('says what is wrong where no mail server is set or reached', async () => {
    await prepare([]);
    await expect(openMailLine({ smtpUrl: null, mailFrom: 'x@h.example' })).rejects.toThrow(/SMTP_URL/);
    await expect(openMailLine({ smtpUrl: 'smtp://127.0.0.1:9', mailFrom: 'x@h.example' })).rejects.toBeInstanceOf(
      LineError,
    );
  });
});
