import { useState } from 'react';
import type { VisitLogDetail } from '../../../shared/api/visit-logs.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { Button } from '../../components/Button.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextArea } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatCount } from '../../lib/format.ts';
import { useWithdrawVisitLog } from './queries.ts';

/** Takes a log back, with a reason. */
export function WithdrawLog({ siteId, log }: { siteId: string; log: VisitLogDetail }) {
  const [open, setOpen] = useState(false);
  const [reason, setReason] = useState('');
  const [tried, setTried] = useState(false);
  const withdraw = useWithdrawVisitLog(siteId, log.id);
  const kind = screenNote(reason);
  const fault =
    kind !== null
      ? `This looks as if it held ${withArticle(kind)}. Leave out anything that could identify a person.`
      : reason.trim().length < 3
        ? 'Say why, in a few words.'
        : undefined;
  return (
    <>
      <Button
        look="second"
        className="justify-self-start"
        onClick={() => {
          setOpen(true);
        }}
      >
        Withdraw this log
      </Button>
      <Dialog
        title="Withdraw this log?"
        open={open}
        onClose={() => {
          setOpen(false);
        }}
      >
        <form
          className="grid gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            setTried(true);
            if (fault) return;
            withdraw.mutate(reason.trim(), {
              onSuccess: () => {
                setOpen(false);
              },
            });
          }}
        >
          <p className="text-ink2">
            Its {formatCount(log.rows, log.kind === 'hourly counts' ? 'hourly count' : 'visit')} stop counting at once
            and are deleted. Models fitted on them stay as they are and say so until a new one is fitted. Older logs
            that it replaced count again.
          </p>
          <TextArea
            label="Reason"
            hint="Kept with the log. No patient details."
            maxLength={500}
            value={reason}
            error={tried || kind !== null ? fault : undefined}
            onChange={(event) => {
              setReason(event.target.value);
            }}
          />
          {withdraw.error ? <ProblemNotice error={withdraw.error} /> : null}
          <Button type="submit" className="justify-self-start" busy={withdraw.isPending} busyText="Withdrawing…">
            Withdraw {formatCount(log.rows, log.kind === 'hourly counts' ? 'hourly count' : 'visit')}
          </Button>
        </form>
      </Dialog>
    </>
  );
}
