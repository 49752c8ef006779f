import { SMTPServer } from 'smtp-server';
import type { AddressInfo } from 'node:net';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { startMailbox, type Mailbox } from '../../demo/mailbox.ts';
import { ConfigError } from '../../server/errors.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Job } from '../../server/entities/Job.ts';
import { makeMailer, mailSchema, MailError } from '../../server/mail/mailer.ts';
import { layOutMail } from '../../server/mail/layout.ts';
import { enqueueMail } from '../../server/mail/send-mail.job.ts';
import { buildPerson, buildSite } from '../support/build-site.ts';
import { openTestServer, type TestServer } from '../support/test-server.ts';

/*
 * Everything here goes to mail servers on the loopback address. Sources: RFC 5322, 2.2 (a header ends with its line) and
 * 3.6.4 (Message-ID); RFC 3834, 5 (Auto-Submitted); RFC 5891 (the ASCII form of a domain); RFC 5321, 4.2.1 (4yz is for now, 5yz
 * for good).
 */
const mailFrom = 'Shoalmark <planning@farrowmere.example>';
const mail = { to: 'on-call@farrowmere.example', subject: 'Acute', text: 'Acute passes its limit.', html: null };

let mailbox: Mailbox;
beforeAll(async () => {
  mailbox = await startMailbox({ smtpPort: 0, httpPort: 0 });
});
afterAll(() => mailbox.close());

/** A mail server that answers each recipient with the next of these codes, then takes everything. */
async function startFussyServer(
  codes: number[],
): Promise<{ smtpUrl: string; taken: () => number; close: () => Promise<void> }> {
  let taken = 0;
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    disableReverseLookup: true,
    onRcptTo({ address }, _session, callback) {
      const code = codes.shift();
      if (code === undefined) callback();
      else callback(Object.assign(new Error(`No mail for ${address}`), { responseCode: code }));
    },
    onData(stream, _session, callback) {
      stream.resume();
      stream.on('end', () => {
        taken += 1;
        callback();
      });
    },
  });
  smtp.on('error', () => undefined);
  await new Promise<void>((resolve) => smtp.listen(0, '127.0.0.1', resolve));
  const { port } = smtp.server.address() as AddressInfo;
  return {
    smtpUrl: `smtp://127.0.0.1:${String(port)}`,
    taken: () => taken,
    close: () => new Promise((resolve) => smtp.close(() => resolve())),
  };
}

describe('the mailer', () => {
  test('sends text and HTML to one recipient, with an id of its own and marked as automatic', async () => {
    const html = '<p>Acute <b>passes</b> its limit.</p>';
    await makeMailer({ smtpUrl: mailbox.smtpUrl, mailFrom }).send(
      { ...mail, subject: 'Düne: 62 % — likely', html },
      'job1',
    );
    const [got] = mailbox.messages();
    expect(got).toMatchObject({
      subject: 'Düne: 62 % — likely',
      recipients: [mail.to],
      html: expect.stringContaining(html),
    });
    expect(got.from).toBe('"Shoalmark" <planning@farrowmere.example>');
    expect(got.text?.trim()).toBe(mail.text);
    const header = (name: string) => got.headers.find((each) => each.name.toLowerCase() === name)?.value;
    expect(header('message-id')).toBe('<job1@farrowmere.example>');
    expect(header('auto-submitted')).toBe('auto-generated');
  });

  test('writes the domain of an internationalised address as mail servers know it, and keeps its local part', async () => {
    const mailer = makeMailer({ smtpUrl: mailbox.smtpUrl, mailFrom });
    await mailer.send({ ...mail, to: 'nachtdienst@klinik-münchen.example' }, 'job2');
    // The ASCII form is what Python 3's idna codec gives. The stand-in shows the envelope decoded, the header as sent.
    const toHeader = mailbox.messages()[0].headers.find(({ name }) => name === 'To')?.value;
    expect(toHeader).toBe('nachtdienst@xn--klinik-mnchen-3ob.example');
    expect(mailbox.messages()[0].recipients).toEqual(['nachtdienst@klinik-münchen.example']);
    await mailer.send({ ...mail, to: 'équipe@farrowmere.example' }, 'job3');
    expect(mailbox.messages()[0].recipients).toEqual(['équipe@farrowmere.example']);
  });

  test.each([
    ['a header in the subject', { subject: 'Acute\r\nBcc: all@farrowmere.example' }],
    ['a line feed alone', { subject: 'Acute\nBcc: all@farrowmere.example' }],
    ['a line separator', { subject: 'Acute\u2028Bcc: all@farrowmere.example' }],
    ['a NUL', { subject: 'Acute\u0000' }],
    ['no subject', { subject: ' ' }],
    ['a header in the address', { to: 'a@h.example\r\nBcc: all@farrowmere.example' }],
    ['a second recipient', { to: 'a@h.example, all@farrowmere.example' }],
    ['a second recipient in a name', { to: 'all@farrowmere.example <a@h.example>' }],
    ['no text', { text: '' }],
  ])('refuses %s for good and sends nothing', async (_, change) => {
    const before = mailbox.messages().length;
    const sending = makeMailer({ smtpUrl: mailbox.smtpUrl, mailFrom }).send({ ...mail, ...change }, 'job4');
    await expect(sending).rejects.toMatchObject({ name: 'MailError', permanent: true });
    expect(mailSchema.safeParse({ ...mail, ...change }).success).toBe(false);
    expect(mailbox.messages()).toHaveLength(before);
  });

  test('what looks like headers within the text stays text', async () => {
    const text = 'Acute.\r\n.\r\nBcc: all@farrowmere.example\r\n\r\nRSET';
    await makeMailer({ smtpUrl: mailbox.smtpUrl, mailFrom }).send({ ...mail, text }, 'job5');
    const [got] = mailbox.messages();
    expect(got.recipients).toEqual([mail.to]);
    expect(got.text?.replace(/\r\n/g, '\n').trim()).toBe(text.replace(/\r\n/g, '\n'));
    expect(got.headers.map(({ name }) => name.toLowerCase())).not.toContain('bcc');
  });

  test.each([
    [550, true],
    [450, false],
  ])('an address that is answered %i: for good is %s, and the words do not repeat it', async (code, permanent) => {
    const fussy = await startFussyServer([code]);
    const sending = makeMailer({ smtpUrl: fussy.smtpUrl, mailFrom }).send(mail, 'job6');
    const error: unknown = await sending.catch((caught: unknown) => caught);
    expect(error).toBeInstanceOf(MailError);
    expect(error).toMatchObject({ permanent });
    expect((error as MailError).message).not.toContain('@');
    await fussy.close();
  });

  test.each(['', 'nobody', 'A <a@b>, B <c@d>', 'a@b\r\nBcc: c@d', 'x <a@b> y'])(
    'a sender %j stops the start',
    (from) => {
      expect(() => makeMailer({ smtpUrl: null, mailFrom: from })).toThrow(ConfigError);
    },
  );
});

describe('the job that sends', () => {
  let server: TestServer;
  afterEach(() => server.close());

  async function queue(smtpUrl: string | null, notAfter?: number): Promise<{ jobId: string; siteId: string }> {
    server = await openTestServer({ config: { smtpUrl, mailFrom } });
    const { site } = await buildSite(server.deps.database);
    const spec = { mail, title: 'Alert: Acute', siteId: site.id, createdBy: 'test', ...(notAfter ? { notAfter } : {}) };
    const jobId = await server.deps.database.write((manager) => enqueueMail(server.deps, manager, spec));
    return { jobId, siteId: site.id };
  }
  const jobOf = (id: string) => server.deps.database.read.findOneByOrFail(Job, { id });

  test('delivers, with the job’s id as the message’s', async () => {
    const { jobId } = await queue(mailbox.smtpUrl);
    await server.workJobs();
    expect(await jobOf(jobId)).toMatchObject({ status: 'done', attempts: 1 });
    const [got] = mailbox.messages();
    expect(got.headers).toContainEqual({ name: 'Message-ID', value: `<${jobId}@farrowmere.example>` });
  });

  test('tries again with growing pauses while the server does not take it, and delivers once', async () => {
    const fussy = await startFussyServer([450, 451]);
    const { jobId } = await queue(fussy.smtpUrl);
    const waits: number[] = [];
    for (let attempt = 1; attempt <= 2; attempt += 1) {
      await server.workJobs();
      const job = await jobOf(jobId);
      expect(job).toMatchObject({ status: 'queued', attempts: attempt, error: expect.stringContaining('45') });
      waits.push(job.runAfter - server.time.now);
      server.time.now = job.runAfter;
    }
    await server.workJobs();
    expect(await jobOf(jobId)).toMatchObject({ status: 'done', attempts: 3, error: null });
    expect(waits[1]).toBeGreaterThan(waits[0]);
    expect(fussy.taken()).toBe(1);
    await fussy.close();
  });

  test('an hour without a mail server is outlasted', async () => {
    const { jobId } = await queue('smtp://127.0.0.1:9');
    const begun = server.time.now;
    while (server.time.now - begun < 3600) {
      await server.workJobs();
      const job = await jobOf(jobId);
      expect(job.status).toBe('queued');
      server.time.now = job.runAfter;
    }
  });

  test('a refusal for good ends it at once; the failure stands in the list of jobs and in the audit trail', async () => {
    const fussy = await startFussyServer([550, 550]);
    const { jobId, siteId } = await queue(fussy.smtpUrl);
    await server.workJobs();
    const person = await buildPerson(server.deps.database, [{ role: 'operations', siteId }]);
    const { body } = await (await server.signedInAs(person.id)).get(`/api/sites/${siteId}/jobs`);
    const [listed] = (body as { jobs: object[] }).jobs;
    expect(listed).toMatchObject({ id: jobId, status: 'failed', error: expect.stringContaining('550') });
    expect(JSON.stringify(listed)).not.toContain('@');
    const audited = await server.deps.database.read.findOneByOrFail(AuditEvent, { event: 'mail.not-sent' });
    expect(audited).toMatchObject({ subject: jobId, siteId, actor: 'the mailer' });
    expect(audited.detail).not.toContain('@');
    await fussy.close();
  });

  test('without a mail server set it fails at once and says what to set', async () => {
    const { jobId } = await queue(null);
    await server.workJobs();
    expect(await jobOf(jobId)).toMatchObject({ status: 'failed', error: expect.stringContaining('SMTP_URL') });
  });

  test('what has become too late is not sent', async () => {
    const before = mailbox.messages().length;
    const { jobId } = await queue(mailbox.smtpUrl, 1_790_000_000);
    await server.workJobs();
    expect(await jobOf(jobId)).toMatchObject({ status: 'failed', error: expect.stringContaining('Too late') });
    expect(mailbox.messages()).toHaveLength(before);
  });

  test('a message that could never be sent is not queued', async () => {
    server = await openTestServer();
    const spec = { mail: { ...mail, subject: 'a\nb' }, title: 'x', siteId: null, createdBy: 'test' };
    const queued = server.deps.database.write((manager) => Promise.resolve(enqueueMail(server.deps, manager, spec)));
    await expect(queued).rejects.toThrow();
    expect(await server.deps.database.read.count(Job)).toBe(0);
  });
});

test('a message reads the same as text and as HTML, whatever it holds', () => {
  const { text, html } = layOutMail({
    title: 'A&E <Acute> passes its limit.',
    blocks: [
      { heading: 'A&E "Acute"', lines: ['One.', '<script>alert(1)</script>'] },
      { heading: null, lines: ['Two.'] },
    ],
    link: { text: 'Open Tonight', url: 'https://shoalmark.example/sites/a/tonight?x=1&y="2"' },
    footer: ['Planning aid.'],
  });
  expect(html).not.toMatch(/<script|<style|<img/);
  const read = html
    .replace(/^[^]*<body[^>]*>/, '')
    .replace(/<[^>]+>/g, ' ')
    .replace(/&#(\d+);/g, (_, code) => String.fromCharCode(Number(code)));
  const words = (value: string) => value.replace(/\s+/g, ' ').trim();
  expect(words(read)).toBe(words(text.replace(/Open Tonight:\n\S+"2"/, 'Open Tonight')));
  expect(html).toContain('href="https://shoalmark.example/sites/a/tonight?x=1&#38;y=&#34;2&#34;"');
  expect(html.length).toBeLessThan(100_000);
});
