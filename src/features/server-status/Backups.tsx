import type { ServerStatus } from '../../../shared/api/server-status.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatCount, formatDateTime, formatNumber } from '../../lib/format.ts';
import { formatBytes } from './format-bytes.ts';
import { useAskBackup } from './queries.ts';

/** The backups that are kept, and where one more is asked for. */
export function Backups({ backups, timeZone }: { backups: ServerStatus['backups']; timeZone: string }) {
  const ask = useAskBackup();
  return (
    <>
      <p className="max-w-[58rem] text-ink2">
        {backups.everyHours === 0
          ? 'None is made by the clock.'
          : `One every ${formatCount(backups.everyHours, 'hour')}, each checked; the newest ${String(backups.keep)} are kept`}{' '}
        in <code className="break-all">{backups.folder}</code>. Copy them to another machine: a disk that fails takes
        both. Restored with the server stopped, by <code>npm run restore -- FILE</code>.
      </p>
      <DataTable
        caption="Backups"
        captionHidden
        rows={backups.files}
        rowKey={({ name }) => name}
        empty="No backup yet. Make the first one below."
        columns={[
          {
            key: 'made',
            header: 'Made',
            rowHeader: true,
            cell: ({ madeAt }) => formatDateTime(madeAt, timeZone),
          },
          { key: 'name', header: 'File', cell: ({ name }) => name },
          { key: 'size', header: 'Size', figure: true, cell: ({ bytes }) => formatBytes(bytes) },
          { key: 'rows', header: 'Rows', figure: true, cell: ({ rows }) => formatNumber(rows) },
        ]}
      />
      {ask.error ? <ProblemNotice error={ask.error} /> : null}
      <Button
        look="second"
        className="justify-self-start"
        busy={ask.isPending || backups.underWay}
        busyText="A backup is being made…"
        onClick={() => ask.mutate()}
      >
        Make a backup now
      </Button>
    </>
  );
}
