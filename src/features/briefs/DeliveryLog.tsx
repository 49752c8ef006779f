import type { Delivery } from '../../../shared/api/briefs.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { deliveryWords, mayBeSentAgain } from './brief-words.ts';

/** To whom a brief went, with attempts and what the mail server said. */
export function DeliveryLog({
  deliveries,
  timeZone,
  sendingAgain,
  error,
  onSendAgain,
}: {
  deliveries: readonly Delivery[];
  timeZone: string;
  sendingAgain: boolean;
  error: unknown;
  onSendAgain: (deliveryId: string) => void;
}) {
  return (
    <div className="grid grid-cols-1 gap-3">
      {error ? <ProblemNotice error={error} /> : null}
      <DataTable
        caption="Deliveries"
        captionHidden
        rows={deliveries}
        rowKey={(delivery) => delivery.id}
        empty="This brief has gone to nobody yet."
        columns={[
          {
            key: 'to',
            header: 'To',
            rowHeader: true,
            cell: (delivery) => (
              <>
                {delivery.name}
                {delivery.test ? ' (test)' : ''}
                <span className="block font-normal text-ink2">{delivery.address}</span>
              </>
            ),
          },
          {
            key: 'state',
            header: 'State',
            cell: (delivery) => (
              <>
                <span className={delivery.state === 'sent' ? undefined : 'font-bold text-ink'}>
                  {deliveryWords[delivery.state]}
                  {delivery.sentAt === null ? '' : `, ${formatDateTime(delivery.sentAt, timeZone)}`}
                </span>
                {delivery.returnedAt === null ? null : (
                  <span className="block font-bold text-ink">
                    Came back, {formatDateTime(delivery.returnedAt, timeZone)}
                  </span>
                )}
              </>
            ),
          },
          { key: 'attempts', header: 'Attempts', figure: true, cell: (delivery) => delivery.attempts },
          {
            key: 'answer',
            header: 'What the mail server said',
            cell: (delivery) => (
              <div className="grid justify-items-start gap-1 text-ink2">
                {delivery.lastAnswer ?? '–'}
                {delivery.returnedBecause === null ? null : (
                  <span className="text-ink">Returned: {delivery.returnedBecause}</span>
                )}
                {mayBeSentAgain.includes(delivery.state) && !delivery.test ? (
                  <Button
                    look="quiet"
                    busy={sendingAgain}
                    aria-label={`Send again to ${delivery.name}`}
                    onClick={() => onSendAgain(delivery.id)}
                  >
                    Send again
                  </Button>
                ) : null}
              </div>
            ),
          },
        ]}
      />
      <p className="text-quiet text-ink2">
        What comes back later is shown here where the mail server passes its delivery reports on; the administrator can
        set that up. A message sent again carries the same Message-ID.
      </p>
    </div>
  );
}
