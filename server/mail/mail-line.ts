import { Readable } from 'node:stream';
import { domainToASCII } from 'node:url';
import MailComposer from 'nodemailer/lib/mail-composer';
import { parseConnectionUrl } from 'nodemailer/lib/shared';
import SMTPConnection from 'nodemailer/lib/smtp-connection';
import type { Config } from '../config.ts';
import { mailSchema, readSender, type Mail } from './mailer.ts';

/**
 * Why a message was not taken:
 * - later: nothing was handed over; the mail server or the way to it is at fault;
 * - busy: the mail server does not take this message for now;
 * - refused: it will never take it;
 * - unanswered: it broke off after the message's end, without an answer: whether it took the message cannot be known.
 */
export type LineFault = 'later' | 'busy' | 'refused' | 'unanswered';

/** A message that was not taken, in words without an address. */
export class LineError extends Error {
  override name = 'LineError';
  readonly fault: LineFault;

  constructor(fault: LineFault, message: string) {
    super(message);
    this.fault = fault;
  }
}

/** A message of a list: with pictures, and with the address that takes its recipient off the list. */
export interface ListMail extends Mail {
  /** The part before the @ of the Message-ID. */
  id: string;
  pictures: readonly { cid: string; contentType: string; content: string }[];
  unsubscribeUrl: string | null;
}

/** One connection to the mail server, for one message after another. */
export interface MailLine {
  /**
   * Hands a message over.
   * @param beforeEnd runs when the mail server has everything but the dot that ends the message (RFC 5321, 4.1.1.4: until
   * then it may not deliver it); if it rejects, the message is not delivered
   * @returns what the mail server answered, without addresses
   * @throws LineError, or what `beforeEnd` rejected with; the line is closed then
   */
  send(mail: ListMail, beforeEnd: () => Promise<void>): Promise<string>;
  close(): void;
}

interface SmtpFault {
  code?: string;
  responseCode?: number;
  response?: string;
  command?: string;
}

/** Opens a line through SMTP_URL. @throws LineError */
export async function openMailLine({ smtpUrl, mailFrom }: Pick<Config, 'smtpUrl' | 'mailFrom'>): Promise<MailLine> {
  if (smtpUrl === null) {
    throw new LineError('later', 'No mail server is set (SMTP_URL): the administrator can set one.');
  }
  const from = readSender(mailFrom);
  const domain = from.address.slice(from.address.lastIndexOf('@') + 1);
  const options = parseConnectionUrl(smtpUrl);
  const connection = new SMTPConnection({
    ...options,
    connectionTimeout: 15_000,
    greetingTimeout: 15_000,
    socketTimeout: 120_000,
  });
  // Whoever waits for an answer is told when the connection breaks; what breaks between two messages shows at the next one.
  let breakOff: ((fault: SmtpFault) => void) | null = null;
  connection.on('error', (fault: SmtpFault) => breakOff?.(fault));
  connection.on('end', () => breakOff?.({ code: 'ECONNECTION' }));
  const answered = <T>(start: (done: (fault: SmtpFault | null | undefined, value?: T) => void) => void): Promise<T> =>
    new Promise<T>((resolve, reject) => {
      const done = (fault: SmtpFault | null | undefined, value?: T) => {
        breakOff = null;
        if (fault) reject(inWords(fault));
        else resolve(value as T);
      };
      breakOff = done;
      start(done);
    });
  try {
    await answered<unknown>((done) => {
      connection.connect((fault) => done(fault));
    });
    const { auth } = options;
    if (auth) {
      await answered<unknown>((done) => {
        connection.login(auth, (fault) => done(fault));
      });
    }
  } catch (error) {
    connection.close();
    throw error;
  }

  return {
    close: () => {
      connection.quit();
    },
    async send(mail, beforeEnd) {
      const raw = await composeMessage(mail, from, domain);
      let begun = false;
      let ending = false;
      let stopped = null as Error | null;
      const sent = answered<{ response?: string | undefined } | undefined>((done) => {
        const message = new Readable({
          // Asks for more only once what it has is on its way.
          highWaterMark: 1,
          read() {
            if (!begun) {
              begun = true;
              this.push(raw);
              return;
            }
            beforeEnd().then(
              () => {
                ending = true;
                this.push(null);
              },
              (error: unknown) => {
                stopped = error instanceof Error ? error : new Error(String(error));
                connection.close();
                done({ code: 'ESTOPPED' });
              },
            );
          },
        });
        connection.send({ from: from.address, to: [asciiDomain(mail.to)] }, message, done);
      });
      try {
        return withoutAddresses((await sent)?.response ?? '');
      } catch (error) {
        connection.close();
        if (stopped !== null) throw stopped;
        if (error instanceof LineError && ending && error.fault === 'later') {
          throw new LineError(
            'unanswered',
            'The mail server broke off after the end of the message, without an answer: it may have taken it.',
          );
        }
        throw error;
      }
    },
  };
}

/** What the mail server said, in words without an address. */
function inWords({ code = 'unknown fault', responseCode, command, response }: SmtpFault): LineError {
  const said = responseCode === undefined ? '' : ` (${withoutAddresses(response ?? String(responseCode))})`;
  if (code === 'EAUTH') return new LineError('later', `The mail server refused the sign-in in SMTP_URL${said}.`);
  // Only what is said of the recipient or of the message itself concerns this message alone.
  const own = command === 'RCPT TO' || command === 'DATA';
  if (own && responseCode !== undefined) {
    return responseCode >= 500
      ? new LineError('refused', `The mail server refused the address or the message${said}.`)
      : new LineError('busy', `The mail server did not take the message for now${said}.`);
  }
  return new LineError('later', `The mail server cannot be reached or broke off (${code})${said}.`);
}

function withoutAddresses(text: string): string {
  return text
    .replace(/<?[^\s<>]+@[^\s<>]+>?/g, '…')
    .replace(/\s+/g, ' ')
    .slice(0, 300);
}

function asciiDomain(address: string): string {
  const at = address.lastIndexOf('@');
  return `${address.slice(0, at)}@${domainToASCII(address.slice(at + 1))}`;
}

function composeMessage(mail: ListMail, from: { name: string; address: string }, domain: string): Promise<Buffer> {
  const read = mailSchema.safeParse(mail);
  if (!read.success) {
    const faults = read.error.issues.map((issue) => `${String(issue.path[0])}: ${issue.message}`);
    throw new LineError('refused', `The message cannot be sent (${faults.join('; ')}).`);
  }
  const { to, subject, text, html } = read.data;
  const composer = new MailComposer({
    from,
    to: { name: '', address: asciiDomain(to) },
    subject,
    text,
    ...(html === null ? {} : { html }),
    messageId: `<${mail.id}@${domain}>`,
    headers: {
      // RFC 3834, 5: keeps absence notes from answering.
      'Auto-Submitted': 'auto-generated',
      // RFC 2369 and RFC 8058: one press in the mail program, without a sign-in.
      ...(mail.unsubscribeUrl === null
        ? {}
        : {
            'List-Unsubscribe': `<${mail.unsubscribeUrl}>`,
            'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click',
          }),
    },
    attachments: mail.pictures.map(({ cid, contentType, content }) => ({
      cid,
      contentType,
      content: Buffer.from(content, 'base64'),
      contentDisposition: 'inline' as const,
      filename: `${cid}.png`,
    })),
    disableFileAccess: true,
    disableUrlAccess: true,
  });
  return composer.compile().build();
}
