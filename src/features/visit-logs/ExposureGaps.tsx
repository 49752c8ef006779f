import { useState } from 'react';
import type { ExposureGap } from '../../../shared/api/exposure-gaps.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatDate, formatDateTime } from '../../lib/format.ts';
import { DeclareGapForm } from './DeclareGapForm.tsx';
import { useExposureGaps, useRemoveGap } from './exposure-gap-queries.ts';
import type { AreaName } from './mapping.ts';

const kindNames: Record<ExposureGap['kind'], string> = { outage: 'Outage', diversion: 'Diversion' };

/** Hours that no log can speak for: declared, listed, removed. */
export function ExposureGaps({
  siteId,
  areas,
  timeZone,
  mayDeclare,
}: {
  siteId: string;
  areas: readonly AreaName[];
  timeZone: string;
  mayDeclare: boolean;
}) {
  const query = useExposureGaps(siteId);
  const [declaring, setDeclaring] = useState(false);
  const [removing, setRemoving] = useState<ExposureGap | null>(null);
  const remove = useRemoveGap(siteId);
  const areaName = ({ areaId }: ExposureGap) =>
    areaId === null ? 'Whole department' : (areas.find(({ id }) => id === areaId)?.name ?? 'An area no longer there');
  const hours = ({ from, until }: ExposureGap) =>
    `${formatDateTime(from, timeZone)} to ${formatDateTime(until, timeZone)}`;
  return (
    <section className="grid grid-cols-[minmax(0,1fr)] gap-3" aria-label="Outages and diversions">
      <h2 className="text-h2">Outages and diversions</h2>
      <p className="max-w-[58rem] text-ink2">
        Hours in which visits were not recorded, or patients were sent elsewhere. The next fit leaves them out, so that
        the model does not take them for quiet hours; a model fitted before says that it did not know of them.
      </p>
      {query.error ? (
        <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
      ) : null}
      {query.isPending ? <SkeletonLines lines={2} label="Loading outages and diversions" /> : null}
      {query.data ? (
        <DataTable
          caption="Outages and diversions"
          captionHidden
          rows={query.data}
          rowKey={({ id }) => id}
          empty="None is declared."
          columns={[
            { key: 'hours', header: 'Hours', rowHeader: true, cell: hours },
            { key: 'kind', header: 'Kind', cell: ({ kind }) => kindNames[kind] },
            { key: 'where', header: 'Where', cell: areaName },
            { key: 'why', header: 'Reason', cell: ({ reason }) => <span className="text-ink2">{reason}</span> },
            {
              key: 'who',
              header: 'Declared',
              cell: ({ declaredBy, declaredAt }) => (
                <span className="text-ink2">
                  {declaredBy === null || declaredAt === null
                    ? 'at setup'
                    : `${formatDate(declaredAt, timeZone)}, ${declaredBy}`}
                </span>
              ),
            },
            ...(mayDeclare
              ? [
                  {
                    key: 'remove',
                    header: 'Take back',
                    cell: (gap: ExposureGap) => (
                      <Button
                        look="quiet"
                        aria-label={`Remove the ${gap.kind} ${hours(gap)}, ${areaName(gap)}`}
                        onClick={() => {
                          remove.reset();
                          setRemoving(gap);
                        }}
                      >
                        Remove
                      </Button>
                    ),
                  },
                ]
              : []),
          ]}
        />
      ) : null}
      {mayDeclare ? (
        <Button
          look="second"
          className="justify-self-start"
          onClick={() => {
            setDeclaring(true);
          }}
        >
          Declare an outage or a diversion
        </Button>
      ) : null}
      <Dialog
        title="Declare an outage or a diversion"
        open={declaring}
        onClose={() => {
          setDeclaring(false);
        }}
      >
        {declaring ? (
          <DeclareGapForm
            siteId={siteId}
            areas={areas}
            timeZone={timeZone}
            onDone={() => {
              setDeclaring(false);
            }}
          />
        ) : null}
      </Dialog>
      <Dialog
        title={removing ? `Remove this ${removing.kind}?` : 'Remove'}
        open={removing !== null}
        onClose={() => {
          setRemoving(null);
        }}
      >
        {removing ? (
          <div className="grid gap-4">
            <p className="text-ink2">
              {hours(removing)}, {areaName(removing)}. The next fit learns from these hours again.
            </p>
            {remove.error ? <ProblemNotice error={remove.error} /> : null}
            <Button
              className="justify-self-start"
              busy={remove.isPending}
              busyText="Removing…"
              onClick={() => {
                remove.mutate(removing.id, {
                  onSuccess: () => {
                    setRemoving(null);
                  },
                });
              }}
            >
              Remove it
            </Button>
          </div>
        ) : null}
      </Dialog>
    </section>
  );
}
