import { useState } from 'react';
import type { AuditEventReply } from '../../../shared/api/audit-log.ts';
import { auditEventInWords } from '../../../shared/domain/audit-topic.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { TakeOutNote } from './TakeOutNote.tsx';

/** Counts and settings in words; ids stand in the export. */
function detailInWords(detail: Record<string, unknown>, timeZone: string): string {
  return Object.entries(detail)
    .filter(([key, value]) => !/Id$/.test(key) && value !== null && typeof value !== 'object')
    .map(([key, value]) => {
      const words = key.replace(
        /([a-z])([A-Z])/g,
        (_, before: string, after: string) => `${before} ${after.toLowerCase()}`,
      );
      // Instants are the only whole numbers of this size.
      const shown = typeof value === 'number' && value > 1e9 ? formatDateTime(value, timeZone) : String(value);
      return `${words.replace(/ at$/, '')} ${shown}`;
    })
    .join(', ');
}

/** Who did what, when, from where; newest first. */
export function AuditList({
  siteId,
  events,
  timeZone,
}: {
  siteId: string | null;
  events: readonly AuditEventReply[];
  timeZone: string;
}) {
  const [asked, setAsked] = useState<AuditEventReply | null>(null);
  return (
    <>
      <DataTable
        caption="Audit trail"
        captionHidden
        rows={events}
        rowKey={({ id }) => String(id)}
        // The page itself filters, and saves with the digests.
        file={false}
        empty="Nothing fits. Widen the filter above."
        columns={[
          {
            key: 'at',
            header: 'When',
            rowHeader: true,
            cell: ({ at, id }) => (
              <>
                {formatDateTime(at, timeZone)}
                <span className="block text-quiet font-semibold text-ink2">row {id}</span>
              </>
            ),
          },
          { key: 'actor', header: 'Who', cell: ({ actor }) => actor },
          {
            key: 'event',
            header: 'What',
            cell: (row) => (
              <>
                {auditEventInWords(row.event)}
                <span className="block text-quiet [overflow-wrap:anywhere] text-ink2">
                  {detailInWords(row.detail, timeZone)}
                </span>
              </>
            ),
          },
          ...(siteId === null
            ? [{ key: 'site', header: 'Site', cell: (row: AuditEventReply) => row.siteName ?? 'Installation' }]
            : []),
          {
            key: 'note',
            header: 'Note',
            cell: (row) =>
              row.note.state === 'none' ? (
                ''
              ) : row.note.state === 'kept' ? (
                <>
                  {row.note.text ?? <span className="text-ink2">Kept at the site</span>}{' '}
                  <Button
                    look="quiet"
                    aria-label={`Take the note of row ${String(row.id)} out`}
                    onClick={() => setAsked(row)}
                  >
                    Take out
                  </Button>
                </>
              ) : (
                <span className="text-ink2">
                  Taken out {formatDateTime(row.note.at, timeZone)} by {row.note.by}
                </span>
              ),
          },
          {
            key: 'from',
            header: 'From',
            cell: ({ address, requestId }) => (
              <span className="text-ink2">
                {address ?? 'the server itself'}
                {requestId ? <span className="block text-quiet">request {requestId.slice(0, 8)}</span> : null}
              </span>
            ),
          },
        ]}
      />
      <TakeOutNote siteId={siteId} event={asked} onClose={() => setAsked(null)} />
    </>
  );
}
