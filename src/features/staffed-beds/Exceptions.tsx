import { useState } from 'react';
import type { z } from 'zod';
import type { Site } from '../../../shared/api/sites.ts';
import type { bedChange } from '../../../shared/api/staffed-beds.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { announce } from '../../lib/announce.ts';
import { formatDateTime, formatNumber } from '../../lib/format.ts';
import { ExceptionFields } from './ExceptionFields.tsx';
import { useAddException, useRemoveException } from './queries.ts';

type BedChange = z.infer<typeof bedChange>;

/** Dated exceptions from now on, how they are taken back, and the fields for another. */
export function Exceptions({
  site,
  changes,
  mayEdit,
  now,
}: {
  site: Site;
  changes: readonly BedChange[];
  mayEdit: boolean;
  now: number;
}) {
  const [asked, setAsked] = useState<BedChange | null>(null);
  const remove = useRemoveException(site.id);
  const putBack = useAddException(site.id);
  function takeBack({ id, areaId, fromAt, untilAt, beds, reason }: BedChange) {
    remove.mutate(id, {
      onSuccess: () => {
        setAsked(null);
        // What has begun cannot begin again: from now on it would.
        const undo = () => putBack.mutate({ areaId, fromAt: Math.max(fromAt, now), untilAt, beds, reason });
        announce(`The exception of ${nameOf(areaId)} was taken back.`, undo);
      },
    });
  }
  const nameOf = (id: string) => site.areas.find((area) => area.id === id)?.name ?? 'An area of earlier';
  return (
    <section className="grid grid-cols-1 gap-4" aria-labelledby="exceptions">
      <h2 id="exceptions" className="text-section">
        Dated exceptions
      </h2>
      <DataTable
        caption="Exceptions and changes from now on"
        captionHidden
        rows={changes}
        rowKey={({ id }) => id}
        empty="None: every day goes by the plan."
        columns={[
          { key: 'area', header: 'Area', rowHeader: true, cell: ({ areaId }) => nameOf(areaId) },
          {
            key: 'when',
            header: 'When',
            cell: ({ fromAt, untilAt }) =>
              `${formatDateTime(fromAt, site.timeZone)} to ${formatDateTime(untilAt, site.timeZone)}`,
          },
          { key: 'beds', header: 'Staffed', figure: true, cell: ({ beds }) => <b>{formatNumber(beds)}</b> },
          {
            key: 'why',
            header: 'Reason',
            cell: ({ kind, reason }) => (kind === 'change now' ? `${reason} (changed for the shift)` : reason),
          },
          {
            key: 'by',
            header: 'By',
            cell: ({ madeBy, madeAt }) => `${madeBy}, ${formatDateTime(madeAt, site.timeZone)}`,
          },
          ...(mayEdit
            ? [
                {
                  key: 'remove',
                  header: <span className="sr-only">Take back</span>,
                  cell: (change: BedChange) =>
                    change.kind === 'dated exception' ? (
                      <Button
                        look="quiet"
                        aria-label={`Take back the exception of ${nameOf(change.areaId)}, ${formatDateTime(change.fromAt, site.timeZone)}`}
                        onClick={() => setAsked(change)}
                      >
                        Take back
                      </Button>
                    ) : null,
                },
              ]
            : []),
        ]}
      />
      {putBack.error ? <ProblemNotice error={putBack.error} /> : null}
      {mayEdit ? <ExceptionFields site={site} now={now} /> : null}
      <Dialog title="Take this exception back?" open={asked !== null} onClose={() => setAsked(null)}>
        {asked ? (
          <div className="grid grid-cols-1 gap-4">
            <p className="text-ink2">
              {nameOf(asked.areaId)} then goes by the plan again
              {asked.fromAt < now ? ' from now on' : ''} until {formatDateTime(asked.untilAt, site.timeZone)}.
            </p>
            {remove.error ? <ProblemNotice error={remove.error} /> : null}
            <Button
              className="justify-self-start"
              busy={remove.isPending}
              busyText="Taking it back…"
              onClick={() => takeBack(asked)}
            >
              Take it back
            </Button>
          </div>
        ) : null}
      </Dialog>
    </section>
  );
}
