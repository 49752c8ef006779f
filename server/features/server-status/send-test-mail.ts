import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { badInput, HttpError } from '../../errors.ts';
import { recordAudit, type AuditSource } from '../../http/audit.ts';
import { layOutMail } from '../../mail/layout.ts';
import { MailError } from '../../mail/mailer.ts';

/** Sends a message at once to whoever asks, so that the settings of the mail server can be judged. */
export async function sendTestMail(deps: Dependencies, context: AuditSource): Promise<{ to: string }> {
  const to = context.caller?.person.email ?? '';
  if (to === '') {
    throw badInput(
      'Your hospital account has no e-mail address.',
      [],
      'Sign in with an account that has one, and try again.',
    );
  }
  const laidOut = layOutMail({
    title: 'Mail from Shoalmark arrives here.',
    blocks: [{ heading: null, lines: ['An administrator asked for this message to try the mail settings.'] }],
    link: { text: 'Server status', url: `${deps.config.baseUrl}/status` },
    footer: ['Mail may be late and is not a pager.'],
  });
  let failure: MailError | null = null;
  try {
    await deps.mailer.send({ to, subject: 'Test of the mail settings', ...laidOut }, newId());
  } catch (error) {
    if (!(error instanceof MailError)) throw error;
    failure = error;
  }
  const detail = { sent: failure === null };
  await deps.database.write((manager) => recordAudit(manager, context, 'mail.tested', '', detail));
  if (failure) {
    throw new HttpError(502, 'The message was not sent', failure.message, {
      kept: 'Mail that waits is tried again by itself.',
      next: 'Correct SMTP_URL or MAIL_FROM, start the server again and repeat the test.',
    });
  }
  return { to };
}
