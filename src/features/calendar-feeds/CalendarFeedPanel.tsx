import { useState } from 'react';
import type { CalendarFeed } from '../../../shared/api/calendar-feeds.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { TextField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { SecretOnce } from '../../components/SecretOnce.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatDate, formatDateTime } from '../../lib/format.ts';
import { useCalendarFeeds, useMakeCalendarFeed, useRevokeCalendarFeed } from './queries.ts';

/** Makes and revokes the secret addresses at which calendar programs read the shifts past the limit. */
export function CalendarFeedPanel({ siteId, timeZone }: { siteId: string; timeZone: string }) {
  const feeds = useCalendarFeeds(siteId);
  const make = useMakeCalendarFeed(siteId);
  const revoke = useRevokeCalendarFeed(siteId);
  const [name, setName] = useState('');
  const [made, setMade] = useState<{ name: string; address: string } | null>(null);
  const [asked, setAsked] = useState<CalendarFeed | null>(null);
  const [tooShort, setTooShort] = useState(false);
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-4" aria-labelledby="calendar-feed">
      <h2 id="calendar-feed" className="text-section">
        Calendar feed
      </h2>
      <p className="max-w-[58rem] text-ink2">
        A calendar program can subscribe to the shifts past their limit, at a secret address that you can revoke.
        Whoever has the address can read it without signing in: chances, areas and shifts, nothing about patients.
      </p>
      {made ? (
        <SecretOnce
          title={`The address for “${made.name}” is made. Copy it now: it is not shown again.`}
          label="Address to subscribe to"
          secret={made.address}
          copyText="Copy the address"
          onKept={() => setMade(null)}
        >
          Whoever has it reads the feed without signing in: keep it as you keep a password.
        </SecretOnce>
      ) : null}
      {feeds.error && !feeds.data ? (
        <ProblemNotice error={feeds.error} onRetry={() => void feeds.refetch()} retrying={feeds.isFetching} />
      ) : null}
      {feeds.isPending ? <SkeletonLines lines={2} label="Loading the calendar feeds" /> : null}
      {feeds.data && feeds.data.length > 0 ? (
        <DataTable
          caption="Calendar feeds"
          captionHidden
          rows={feeds.data}
          rowKey={({ id }) => id}
          columns={[
            { key: 'name', header: 'Calendar', rowHeader: true, cell: (feed) => feed.name },
            {
              key: 'made',
              header: 'Made',
              cell: (feed) => `${formatDate(feed.createdAt, timeZone)}, ${feed.createdBy}`,
            },
            {
              key: 'read',
              header: 'Last read',
              cell: (feed) => (feed.lastReadAt === null ? 'Never' : formatDateTime(feed.lastReadAt, timeZone)),
            },
            {
              key: 'state',
              header: 'State',
              cell: (feed) =>
                feed.revokedAt === null ? (
                  <Button look="quiet" aria-label={`Revoke “${feed.name}”`} onClick={() => setAsked(feed)}>
                    Revoke
                  </Button>
                ) : (
                  `Revoked ${formatDate(feed.revokedAt, timeZone)}`
                ),
            },
          ]}
        />
      ) : null}
      <form
        className="flex max-w-2xl flex-wrap items-end gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          setTooShort(name.trim().length < 3);
          if (name.trim().length < 3) return;
          make.mutate(name.trim(), {
            onSuccess: (reply) => {
              setMade({ name: reply.feed.name, address: reply.address });
              setName('');
              // The address must not linger in the mutation's result.
              make.reset();
            },
          });
        }}
      >
        <div className="min-w-56 flex-1">
          <TextField
            label="Which calendar will read it"
            value={name}
            maxLength={80}
            error={tooShort ? 'At least 3 characters.' : undefined}
            onChange={(event) => setName(event.target.value)}
          />
        </div>
        <Button look="second" type="submit" busy={make.isPending} busyText="Making…">
          Make an address
        </Button>
      </form>
      {make.error ? <ProblemNotice error={make.error} /> : null}
      <Dialog title={`Revoke “${asked?.name ?? ''}”?`} open={asked !== null} onClose={() => setAsked(null)}>
        <div className="grid gap-4">
          <p className="text-ink2">
            The calendar that reads it finds nothing from its next reading on; entries it has copied may stay in it.
            This cannot be undone; a new address can be made.
          </p>
          {revoke.error ? <ProblemNotice error={revoke.error} /> : null}
          <Button
            className="justify-self-start"
            busy={revoke.isPending}
            busyText="Revoking…"
            onClick={() => {
              if (asked) revoke.mutate(asked.id, { onSuccess: () => setAsked(null) });
            }}
          >
            Revoke the address
          </Button>
        </div>
      </Dialog>
    </section>
  );
}
