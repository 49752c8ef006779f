import type { ServerStatus } from '../../../shared/api/server-status.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatCount, formatDateTime } from '../../lib/format.ts';
import { useTestMail } from './queries.ts';

/** How mail goes out, and a message to oneself to try it. */
export function MailState({ mail, timeZone }: { mail: ServerStatus['mail']; timeZone: string }) {
  const test = useTestMail();
  return (
    <>
      <p className="max-w-[58rem] text-ink2">
        {mail.set ? (
          <>
            Sent as <b className="text-ink">{mail.from}</b>.{' '}
            {mail.lastSentAt === null
              ? 'Nothing was sent yet.'
              : `Last message sent ${formatDateTime(mail.lastSentAt, timeZone)}.`}{' '}
            {mail.waiting > 0 ? `${formatCount(mail.waiting, 'message waits', 'messages wait')}.` : ''}
            {mail.lastFailure
              ? ` Last failure ${formatDateTime(mail.lastFailure.at, timeZone)}: ${mail.lastFailure.error}`
              : ''}
          </>
        ) : (
          'No mail server is set. Set SMTP_URL and MAIL_FROM, then start the server again.'
        )}
      </p>
      {test.error ? <ProblemNotice error={test.error} /> : null}
      {test.data ? (
        <p role="status">
          The mail server took a message for <b>{test.data.to}</b>. See that it arrives.
        </p>
      ) : null}
      {mail.set ? (
        <Button
          look="second"
          className="justify-self-start"
          busy={test.isPending}
          busyText="Sending…"
          onClick={() => test.mutate()}
        >
          Send a test message to me
        </Button>
      ) : null}
    </>
  );
}
