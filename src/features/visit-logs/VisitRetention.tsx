import { useState } from 'react';
import { retentionDays, type VisitRetention as Retention } from '../../../shared/api/visit-retention.ts';
import { Button } from '../../components/Button.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextField } from '../../components/Field.tsx';
import { Notice, ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatCount, formatDate } from '../../lib/format.ts';
import { useSetVisitRetention, useVisitRetention } from './kept-visits-queries.ts';

/** How long visits are kept, and the way to change it. */
export function VisitRetention({
  siteId,
  timeZone,
  now,
  mayChange,
}: {
  siteId: string;
  timeZone: string;
  now: number;
  mayChange: boolean;
}) {
  const query = useVisitRetention(siteId);
  const [open, setOpen] = useState(false);
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="How long visits are kept">
      <h2 className="text-h2">How long visits are kept</h2>
      {query.error ? (
        <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
      ) : null}
      {query.isPending ? <SkeletonLines lines={2} label="Loading how long visits are kept" /> : null}
      {query.data ? (
        <p className="max-w-[58rem] text-ink2">
          A visit is deleted <b className="text-ink">{formatCount(query.data.days, 'day')}</b> after the arrival; those
          before {formatDate(query.data.keptFrom, timeZone)} are gone. Models, forecasts and scores stay.
        </p>
      ) : null}
      {query.data && mayChange ? (
        <Button
          look="second"
          className="justify-self-start"
          onClick={() => {
            setOpen(true);
          }}
        >
          Change how long visits are kept
        </Button>
      ) : null}
      <Dialog
        title="Change how long visits are kept"
        open={open}
        onClose={() => {
          setOpen(false);
        }}
      >
        {open && query.data ? (
          <RetentionForm
            siteId={siteId}
            retention={query.data}
            timeZone={timeZone}
            now={now}
            onDone={() => {
              setOpen(false);
            }}
          />
        ) : null}
      </Dialog>
    </section>
  );
}

const daySeconds = 86_400;

function RetentionForm({
  siteId,
  retention,
  timeZone,
  now,
  onDone,
}: {
  siteId: string;
  retention: Retention;
  timeZone: string;
  now: number;
  onDone: () => void;
}) {
  const [text, setText] = useState(String(retention.days));
  const [tried, setTried] = useState(false);
  const save = useSetVisitRetention(siteId);
  const days = /^\d+$/.test(text.trim()) ? Number(text) : NaN;
  const fault = Number.isNaN(days)
    ? 'Enter a whole number of days.'
    : days < retentionDays.least || days > retentionDays.most
      ? `Between ${formatCount(retentionDays.least, 'day')} and ${formatCount(retentionDays.most, 'day')}.`
      : undefined;
  const from = now - days * daySeconds;
  const deletes = fault === undefined && retention.oldest !== null && retention.oldest < from;
  return (
    <form
      className="grid gap-4"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (fault) return;
        save.mutate(days, { onSuccess: onDone });
      }}
    >
      <div className="max-w-60">
        <TextField
          label="Days after the arrival"
          inputMode="numeric"
          hint={`${formatCount(retentionDays.least, 'day')} to ${formatCount(retentionDays.most, 'day')}; follow your data-sharing agreement.`}
          value={text}
          error={tried ? fault : undefined}
          onChange={(event) => {
            setText(event.target.value);
          }}
        />
      </div>
      {fault === undefined && days < 366 ? (
        <Notice title="Under a year a model does not see every season.">
          <p>It learns from the visits that are kept when it is fitted.</p>
        </Notice>
      ) : null}
      {deletes && retention.oldest !== null ? (
        <Notice kind="caution" title="Saving this deletes visits for good.">
          <p>
            Those that arrived from {formatDate(retention.oldest, timeZone)} until {formatDate(from, timeZone)} stop
            counting at once and are deleted. Only loading their logs again could bring them back, and they would be
            deleted again.
          </p>
        </Notice>
      ) : null}
      {save.error ? <ProblemNotice error={save.error} /> : null}
      <Button type="submit" className="justify-self-start" busy={save.isPending} busyText="Saving…">
        {deletes ? 'Save and delete older visits' : 'Save'}
      </Button>
    </form>
  );
}
