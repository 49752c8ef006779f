import { createServer } from 'node:http';
import type { ServerResponse } from 'node:http';
import type { AddressInfo, Server } from 'node:net';
import { SMTPServer } from 'smtp-server';
import { bounceReport, bounces } from './bounce-report.ts';
import { mailHtml, mailListPage, mailPage, noMailPage } from './mailbox-pages.ts';
import type { KeptMail } from './mailbox-pages.ts';
import { fontPath, nunitoSans, pagePolicy } from './page-shell.ts';
import { readMail } from './read-mail.ts';

export interface Mailbox {
  /** For SMTP_URL. */
  smtpUrl: string;
  /** The page that lists what was sent. */
  url: string;
  /** Messages kept, newest first. */
  messages(): readonly KeptMail[];
  close(): Promise<void>;
}

const loopback = '127.0.0.1';
const kept = 200;

/**
 * Starts the demo's stand-in mail server and its mailbox page, both on the loopback address. It takes every message,
 * keeps the last 200 in memory and passes none on. Port 0 takes a free one.
 * @param onReturned takes the report, as a whole message, that mail to an address such as bounce@… came back
 */
export async function startMailbox({
  smtpPort,
  httpPort,
  onReturned,
}: {
  smtpPort: number;
  httpPort: number;
  onReturned?: (report: string) => void;
}): Promise<Mailbox> {
  const mails: KeptMail[] = [];
  let nextId = 1;
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    disableReverseLookup: true,
    size: 20 * 1024 * 1024,
    onData(stream, session, callback) {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('error', callback);
      stream.on('end', () => {
        const recipients = session.envelope.rcptTo.map(({ address }) => address);
        const received = { id: nextId, receivedAt: new Date().toISOString(), recipients };
        nextId += 1;
        readMail(Buffer.concat(chunks)).then((mail) => {
          mails.unshift({ ...mail, ...received });
          mails.sort((a, b) => b.id - a.id);
          mails.length = Math.min(mails.length, kept);
          callback();
          for (const address of recipients.filter(bounces)) onReturned?.(bounceReport(mail, address));
        }, callback);
      });
    },
  });
  // A sender that hangs up half way is no concern of the mailbox.
  smtp.on('error', () => undefined);
  const http = createServer((req, res) => {
    answer(new URL(req.url ?? '/', `http://${loopback}`).pathname, mails, res);
  });
  await listen(smtp.server, (done) => smtp.listen(smtpPort, loopback, done));
  try {
    await listen(http, (done) => http.listen(httpPort, loopback, done));
  } catch (error) {
    await stopSmtp(smtp);
    throw error;
  }
  return {
    smtpUrl: `smtp://${loopback}:${portOf(smtp.server)}`,
    url: `http://${loopback}:${portOf(http)}`,
    messages: () => mails,
    close: async () => {
      const stopped = new Promise<void>((resolve) => http.close(() => resolve()));
      http.closeAllConnections();
      await Promise.all([stopped, stopSmtp(smtp)]);
    },
  };
}

function listen(server: Server, start: (done: () => void) => void): Promise<void> {
  return new Promise((resolve, reject) => {
    server.once('error', reject);
    start(resolve);
  });
}

function stopSmtp(smtp: SMTPServer): Promise<void> {
  return new Promise((resolve) => smtp.close(() => resolve()));
}

function portOf(server: Server): string {
  return String((server.address() as AddressInfo).port);
}

function answer(path: string, mails: readonly KeptMail[], res: ServerResponse): void {
  const asked = /^\/messages\/(\d+)(\/html)?$/.exec(path);
  const mail = asked ? mails.find(({ id }) => id === Number(asked[1])) : undefined;
  if (path === fontPath) {
    res.writeHead(200, { 'content-type': 'font/woff2', 'cache-control': 'public, max-age=86400' }).end(nunitoSans());
  } else if (path === '/') {
    sendHtml(res, 200, mailListPage(mails), pagePolicy());
  } else if (path === '/messages.json') {
    res
      .writeHead(200, { 'content-type': 'application/json; charset=utf-8', 'cache-control': 'no-store' })
      .end(JSON.stringify(mails.map(presentMail)));
  } else if (mail && path.endsWith('/html')) {
    const policy = "default-src 'none'; style-src 'unsafe-inline'; img-src data:; frame-ancestors 'self'";
    sendHtml(res, 200, mailHtml(mail), `${policy}; sandbox allow-popups allow-popups-to-escape-sandbox`);
  } else if (mail) {
    sendHtml(res, 200, mailPage(mail), pagePolicy());
  } else {
    sendHtml(res, 404, noMailPage(), pagePolicy());
  }
}

function presentMail(mail: KeptMail) {
  const attachments = mail.attachments.map(({ content, ...rest }) => ({ ...rest, bytes: content.length }));
  return { ...mail, attachments };
}

function sendHtml(res: ServerResponse, status: number, html: string, policy: string): void {
  res
    .writeHead(status, {
      'content-type': 'text/html; charset=utf-8',
      'cache-control': 'no-store',
      'content-security-policy': policy,
      'referrer-policy': 'no-referrer',
      'x-content-type-options': 'nosniff',
    })
    .end(html);
}
