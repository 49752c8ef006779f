import { useState } from 'react';
import type { AuditEventReply } from '../../../shared/api/audit-log.ts';
import { Button } from '../../components/Button.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useRedactNote } from './queries.ts';

/** Asks why a note's text goes; for a text that should never have been typed. */
export function TakeOutNote({
  siteId,
  event,
  onClose,
}: {
  siteId: string | null;
  event: AuditEventReply | null;
  onClose: () => void;
}) {
  const redact = useRedactNote(siteId);
  const [reason, setReason] = useState('');
  const [tried, setTried] = useState(false);
  const fault = reason.trim().length < 3 ? 'Say why, in 3 characters or more.' : undefined;
  const close = () => {
    setReason('');
    setTried(false);
    redact.reset();
    onClose();
  };
  return (
    <Dialog title="Take the text of this note out?" open={event !== null} onClose={close}>
      <form
        className="grid gap-4"
        onSubmit={(submit) => {
          submit.preventDefault();
          setTried(true);
          if (!fault && event) redact.mutate({ eventId: event.id, reason: reason.trim() }, { onSuccess: close });
        }}
      >
        <p className="text-ink2">
          The text goes here and at the record that it was typed for, and cannot be brought back. The event stays, with
          who did it and when; that the text was taken out, by whom and why is added to the trail. Older backups still
          hold it.
        </p>
        <TextField
          label="Reason"
          hint="For instance: it named a patient. Do not repeat it."
          maxLength={500}
          value={reason}
          error={tried ? fault : undefined}
          onChange={(change) => setReason(change.target.value)}
        />
        {redact.error ? <ProblemNotice error={redact.error} /> : null}
        <Button type="submit" className="justify-self-start" busy={redact.isPending} busyText="Taking out…">
          Take the text out
        </Button>
      </form>
    </Dialog>
  );
}
