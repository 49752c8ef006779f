import type { ReactNode } from 'react';
import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { bedWindows, changedBeds, dayAndTime, type PlanChange } from '../../../shared/domain/plan-change.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';
import type { PlanPreview } from './preview-plan.ts';
import { RiskFigure } from './RiskFigure.tsx';

/** One column: a plan, or as is. */
export interface PlanColumn {
  key: string;
  /** What heads the column. */
  head: ReactNode;
  changes: readonly PlanChange[];
  /** Null where it cannot be answered; `why` says so. */
  preview: PlanPreview | null;
  why?: string;
}

/** Bed-hours that a plan adds and takes away. */
function bedHoursOf(basis: WhatIfBasis, changes: readonly PlanChange[]): { added: number; taken: number } {
  const { hours } = basis.exact;
  const end = hours[hours.length - 1];
  let added = 0;
  let taken = 0;
  for (const { areaId, staffedBeds } of basis.areas) {
    const windows = bedWindows(changes, areaId);
    if (windows.length === 0) continue;
    const changed = changedBeds(staffedBeds, windows);
    const cuts = [...new Set([...staffedBeds, ...changed].map(({ at }) => at))].sort((a, b) => a - b);
    cuts.forEach((at, i) => {
      const length = (Math.min(cuts[i + 1] ?? end, end) - at) / 3600;
      const more = (bedsAt(changed, at) - bedsAt(staffedBeds, at)) * Math.max(0, length);
      if (more > 0) added += more;
      else taken -= more;
    });
  }
  return { added, taken };
}

/** The plans beside as is, an area a row: the hour most at risk, and how many hours are past the limit. */
export function SideBySide({
  basis,
  zone,
  columns,
}: {
  basis: WhatIfBasis;
  zone: Zone;
  columns: readonly PlanColumn[];
}) {
  const { hours } = basis.exact;
  type Row = { key: string; head: ReactNode; cell: (column: PlanColumn, preview: PlanPreview) => ReactNode };
  const rows: Row[] = [
    ...basis.areas.map((area, a): Row => ({
      key: area.areaId,
      head: (
        <>
          {area.name}
          {area.countedAt === null ? (
            <span className="block text-quiet font-semibold text-ink2">not counted</span>
          ) : null}
        </>
      ),
      cell: (_, preview) => {
        const { worst, worstAt, hoursPast } = preview.areas[a];
        return (
          <>
            <RiskFigure chance={worst} />
            <span className="mt-0.5 block text-quiet text-ink2">
              {dayAndTime(zone, hours[worstAt])}; {hoursPast === 0 ? 'no hour' : `${String(hoursPast)} h`} past{' '}
              {formatChance(area.alertLimit).replace(' ', '\u00a0')}
            </span>
          </>
        );
      },
    })),
    {
      key: 'short',
      head: 'Bed-hours short in the week, on average',
      cell: (_, preview) => <b>{formatNumber(preview.bedHoursShort, 1)}</b>,
    },
    {
      key: 'beds',
      head: 'Bed-hours staffed beside as is',
      cell: (column) => {
        const { added, taken } = bedHoursOf(basis, column.changes);
        if (added === 0 && taken === 0) return 'the same';
        return [added > 0 ? `+${formatNumber(added)}` : '', taken > 0 ? `−${formatNumber(taken)}` : '']
          .filter(Boolean)
          .join(', ');
      },
    },
  ];
  return (
    <DataTable
      caption="Highest chance of shortfall at a full hour in the next seven days"
      rows={rows}
      rowKey={({ key }) => key}
      columns={[
        { key: 'area', header: 'Area', rowHeader: true, cell: ({ head }) => head },
        ...columns.map((column) => ({
          key: column.key,
          header: column.head,
          cell: ({ cell }: Row) =>
            column.preview ? cell(column, column.preview) : <span className="text-ink2">{column.why}</span>,
        })),
      ]}
    />
  );
}
