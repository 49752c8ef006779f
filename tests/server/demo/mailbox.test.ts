import { createTransport } from 'nodemailer';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { startMailbox } from '../../../demo/mailbox.ts';
import type { Mailbox } from '../../../demo/mailbox.ts';

// The smallest picture there is: one transparent pixel.
const pixel = Buffer.from(
  'iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNkYPhfDwAChwGA60e6kgAAAABJRU5ErkJggg==',
  'base64',
);

describe('startMailbox', () => {
  let mailbox: Mailbox;
  beforeEach(async () => {
    mailbox = await startMailbox({ smtpPort: 0, httpPort: 0 });
  });
  afterEach(() => mailbox.close());

  async function send(message: { subject: string; text?: string; html?: string; picture?: boolean }): Promise<void> {
    const transport = createTransport(mailbox.smtpUrl, { from: 'Shoalmark <planning@farrowmere.example>' });
    await transport.sendMail({
      to: ['marguerite.sol@farrowmere.example'],
      subject: message.subject,
      text: message.text,
      html: message.html,
      headers: { 'List-Unsubscribe': '<https://shoalmark.farrowmere.example/unsubscribe/abc>' },
      attachments:
        message.picture === true
          ? [{ content: pixel, cid: 'chart1', contentType: 'image/png', contentDisposition: 'inline' }]
          : [],
    });
    transport.close();
  }

  it('keeps what was sent, every part readable', async () => {
    const text = `Wednesday night — about 40 % risk.\n${'A long line that a mail program has to wrap = somewhere. '.repeat(8)}`;
    await send({
      subject: 'Week ahead: Acute — Friday night',
      text,
      html: '<html><head><title>x</title></head><body><p>Émile’s brief</p><img src="cid:chart1" alt="Need"></body></html>',
      picture: true,
    });
    const [mail] = mailbox.messages();
    expect(mail.subject).toBe('Week ahead: Acute — Friday night');
    expect(mail.from).toBe('"Shoalmark" <planning@farrowmere.example>');
    expect(mail.recipients).toEqual(['marguerite.sol@farrowmere.example']);
    expect(mail.text?.replace(/\r\n/g, '\n').trim()).toBe(text.trim());
    expect(mail.html).toContain('<p>Émile’s brief</p>');
    expect(mail.attachments).toHaveLength(1);
    expect(mail.attachments[0]).toMatchObject({ contentType: 'image/png', contentId: 'chart1' });
    expect(mail.attachments[0].content.equals(pixel)).toBe(true);
    expect(mail.headers).toContainEqual({
      name: 'List-Unsubscribe',
      value: '<https://shoalmark.farrowmere.example/unsubscribe/abc>',
    });
  });

  it('lists messages, newest first, on a page and as JSON', async () => {
    expect(await (await fetch(mailbox.url)).text()).toContain('Nothing has been sent yet');
    await send({ subject: 'First', text: 'one' });
    await send({ subject: 'Second <script>', text: 'two' });
    const page = await (await fetch(mailbox.url)).text();
    expect(page).toContain('Second &lt;script&gt;');
    expect(page).not.toContain('<script>');
    const json: unknown = await (await fetch(`${mailbox.url}/messages.json`)).json();
    expect(json).toMatchObject([
      { id: 2, subject: 'Second <script>', text: expect.stringContaining('two') as string },
      { id: 1, subject: 'First', html: null },
    ]);
  });

  it('shows the HTML part in a frame that runs no script, with its pictures', async () => {
    await send({
      subject: 'Picture',
      html: '<head></head><img src="cid:chart1"><script>alert(1)</script>',
      picture: true,
    });
    const page = await fetch(`${mailbox.url}/messages/1`);
    expect(await page.text()).toContain('<iframe sandbox="allow-popups allow-popups-to-escape-sandbox"');
    const frame = await fetch(`${mailbox.url}/messages/1/html`);
    const policy = frame.headers.get('content-security-policy') ?? '';
    expect(policy).toContain("default-src 'none'");
    expect(policy).toContain('sandbox');
    expect(policy).not.toContain('allow-scripts');
    expect(await frame.text()).toContain(`src="data:image/png;base64,${pixel.toString('base64')}"`);
  });

  it('answers 404 for a message it does not have', async () => {
    expect((await fetch(`${mailbox.url}/messages/7`)).status).toBe(404);
    expect((await fetch(`${mailbox.url}/else`)).status).toBe(404);
  });

  it('says so when a port is taken', async () => {
    const taken = Number(new URL(mailbox.url).port);
    await expect(startMailbox({ smtpPort: 0, httpPort: taken })).rejects.toThrow('EADDRINUSE');
  });
});
