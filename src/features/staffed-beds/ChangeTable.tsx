import { useState } from 'react';
import { bedHoursAdded, changeTimes, type PlanChange } from '../../../shared/domain/compare-plans.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatCount, formatNumber } from '../../lib/format.ts';

const shownAtFirst = 12;

/** "+12 bed-hours a week", "−3.5 bed-hours a week". */
export function bedHoursInWords(changes: readonly PlanChange[]): string {
  const hours = bedHoursAdded(changes);
  const figure = formatNumber(Math.abs(hours), Number.isInteger(hours) ? 0 : 1);
  if (hours === 0) return 'as many bed-hours a week as before';
  return `${hours > 0 ? `+${figure}` : `−${figure}`} bed-hours a week`;
}

/** What differs between two plans, stretch by stretch. */
export function ChangeTable({
  caption,
  changes,
  nameOf,
}: {
  caption: string;
  changes: readonly PlanChange[];
  nameOf: (areaId: string) => string;
}) {
  const [all, setAll] = useState(false);
  const rows = all ? changes : changes.slice(0, shownAtFirst);
  const figure = (beds: number | null) => (beds === null ? 'no figure' : formatNumber(beds));
  return (
    <div className="grid grid-cols-1 gap-2">
      <DataTable
        caption={caption}
        rows={rows}
        rowKey={({ areaId, from }) => `${areaId} ${String(from)}`}
        empty="Nothing differs."
        columns={[
          { key: 'area', header: 'Area', rowHeader: true, cell: ({ areaId }) => nameOf(areaId) },
          { key: 'times', header: 'When', cell: changeTimes },
          { key: 'before', header: 'Before', figure: true, cell: ({ before }) => figure(before) },
          { key: 'after', header: 'After', figure: true, cell: ({ after }) => <b>{figure(after)}</b> },
          {
            key: 'difference',
            header: 'Difference',
            figure: true,
            cell: ({ before, after }) => {
              if (before === null || after === null) return '–';
              return after > before ? `+${String(after - before)}` : `−${String(before - after)} (reduction)`;
            },
          },
        ]}
      />
      {changes.length > shownAtFirst ? (
        <Button look="quiet" className="justify-self-start" onClick={() => setAll(!all)}>
          {all ? 'Show fewer' : `Show all ${formatCount(changes.length, 'change')}`}
        </Button>
      ) : null}
    </div>
  );
}
