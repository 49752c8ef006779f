import { domainToASCII } from 'node:url';
import { createTransport } from 'nodemailer';
import { z } from 'zod';
import { readMailAddress } from '../../shared/domain/mail-address.ts';
import type { Config } from '../config.ts';
import { ConfigError } from '../errors.ts';

/** A header's line can only be broken by these: no text that holds one is taken. */
const oneLine = /^[^\p{Cc}\u2028\u2029]*$/u;

export const mailSchema = z.object({
  to: z.string().transform((text, context) => {
    const address = readMailAddress(text);
    if (address !== null && domainToASCII(address.slice(address.lastIndexOf('@') + 1)) !== '') return address;
    context.addIssue({ code: 'custom', message: 'not an e-mail address' });
    return z.NEVER;
  }),
  subject: z.string().trim().min(1).max(250).regex(oneLine, 'one line'),
  text: z.string().min(1).max(1_000_000),
  html: z.string().max(1_000_000).nullable(),
});
/** One message to one recipient: nobody sees another's address. */
export type Mail = z.infer<typeof mailSchema>;

/** Mail that was not sent, in words without an address. */
export class MailError extends Error {
  override name = 'MailError';
  /** Sending it again would be refused again. */
  readonly permanent: boolean;

  constructor(message: string, permanent: boolean) {
    super(message);
    this.permanent = permanent;
  }
}

export interface Mailer {
  /**
   * Hands a message to the mail server.
   * @param id of the message, the same at every attempt, so that a message that arrived twice can be told
   * @throws MailError
   */
  send(mail: Mail, id: string): Promise<void>;
}

/**
 * Sends through SMTP_URL; each message has a connection of its own.
 * @throws ConfigError if MAIL_FROM is not an address, with a name or without
 */
export function makeMailer({ smtpUrl, mailFrom }: Pick<Config, 'smtpUrl' | 'mailFrom'>): Mailer {
  const from = readSender(mailFrom);
  const domain = from.address.slice(from.address.lastIndexOf('@') + 1);
  return {
    async send(mail, id) {
      if (smtpUrl === null) {
        throw new MailError('No mail server is set (SMTP_URL): the administrator can set one.', true);
      }
      const read = mailSchema.safeParse(mail);
      if (!read.success) {
        const faults = read.error.issues.map((issue) => `${String(issue.path[0])}: ${issue.message}`);
        throw new MailError(`The message cannot be sent (${faults.join('; ')}).`, true);
      }
      const { to, subject, text, html } = read.data;
      const at = to.lastIndexOf('@');
      const transport = createTransport({
        url: smtpUrl,
        connectionTimeout: 15_000,
        greetingTimeout: 15_000,
        socketTimeout: 60_000,
        // Nothing in a message is ever fetched.
        disableFileAccess: true,
        disableUrlAccess: true,
      });
      try {
        await transport.sendMail({
          from,
          to: { name: '', address: `${to.slice(0, at)}@${domainToASCII(to.slice(at + 1))}` },
          subject,
          text,
          ...(html === null ? {} : { html }),
          messageId: `<${id}@${domain}>`,
          // RFC 3834, 5: keeps absence notes from answering.
          headers: { 'Auto-Submitted': 'auto-generated' },
        });
      } catch (error) {
        throw inWords(error);
      } finally {
        transport.close();
      }
    },
  };
}

/** The sender that MAIL_FROM states. */
export function readSender(text: string): { name: string; address: string } {
  const named = /^"?([^"<>@]*?)"? *<([^<>@\s,;"]+@[^<>@\s,;"]+)>$/.exec(text);
  const bare = /^[^<>@\s,;"]+@[^<>@\s,;"]+$/.exec(text);
  if (!oneLine.test(text) || (!named && !bare)) {
    throw new ConfigError(
      'Cannot start: MAIL_FROM is wrong (an address, or Name <address>). README.md lists every setting.',
    );
  }
  return named ? { name: named[1], address: named[2] } : { name: '', address: text };
}

/** What the mail server said, without the address that its reply may repeat. */
function inWords(error: unknown): MailError {
  const {
    code = 'unknown fault',
    responseCode,
    permanent,
  } = error as {
    code?: string;
    responseCode?: number;
    permanent?: boolean;
  };
  // A refused login is mended by the administrator, not by giving the message up.
  if (code === 'EENVELOPE' || code === 'EMESSAGE') {
    const said = responseCode === undefined ? '' : ` (${String(responseCode)})`;
    return permanent === false
      ? new MailError(`The mail server did not take the message for now${said}.`, false)
      : new MailError(`The mail server refused the address or the message${said}.`, true);
  }
  if (code === 'EAUTH') return new MailError('The mail server refused the sign-in in SMTP_URL.', false);
  return new MailError(`The mail server cannot be reached or broke off (${code}).`, false);
}
