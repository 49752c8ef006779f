import { Link } from 'react-router-dom';
import type { Brief, BriefTally } from '../../../shared/api/briefs.ts';
import { paths } from '../../app/paths.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { sayBriefState } from './brief-words.ts';

/** Every brief, newest first, with what became of it. */
export function BriefList({
  siteId,
  briefs,
  timeZone,
  maySend,
}: {
  siteId: string;
  briefs: readonly (Brief & { tally: BriefTally })[];
  timeZone: string;
  maySend: boolean;
}) {
  return (
    <DataTable
      caption="Briefs, newest first"
      captionHidden
      rows={briefs}
      rowKey={(brief) => brief.id}
      empty={
        maySend
          ? 'No brief has been composed yet. Set the day and hour under Schedule, or compose one now.'
          : 'No brief has been sent yet. The operations manager of the site sets when it goes out.'
      }
      columns={[
        {
          key: 'subject',
          header: 'Brief',
          rowHeader: true,
          cell: (brief) => (
            <Link className="link inline-block min-h-11 py-1.5" to={paths.brief(siteId, brief.id)}>
              {brief.subject}
            </Link>
          ),
        },
        { key: 'state', header: 'State', cell: (brief) => sayBriefState(brief, timeZone) },
        {
          key: 'composed',
          header: 'Composed',
          cell: (brief) => (
            <span className="text-ink2">
              {formatDateTime(brief.composedAt, timeZone)}, {brief.composedBy}
            </span>
          ),
        },
      ]}
    />
  );
}
