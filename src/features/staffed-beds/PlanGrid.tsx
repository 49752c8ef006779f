import { useMemo } from 'react';
import type { CareArea, Site } from '../../../shared/api/sites.ts';
import { clockText } from '../../../shared/domain/clock-text.ts';
import { planCells } from '../../../shared/domain/plan-cells.ts';
import { Button } from '../../components/Button.tsx';
import { formatCount, weekdayName } from '../../lib/format.ts';
import { FigureGrid } from './FigureGrid.tsx';
import type { GridRow } from './FigureGrid.tsx';
import { planCell } from './plan-cell.ts';
import type { DraftAction, PlanDraft, PlanEdit } from './plan-draft.ts';
import { cellKey } from './required-cells.ts';
import type { RequiredCell } from './required-cells.ts';

const days = [1, 2, 3, 4, 5, 6, 7];
const columns = days.map((day) => ({
  key: String(day),
  header: (
    <>
      <span className="max-sm:hidden">{weekdayName(day)}</span>
      <span className="sm:hidden">{weekdayName(day).slice(0, 3)}</span>
    </>
  ),
}));

function AreaHead({ area, open, onOpen }: { area: CareArea; open: boolean; onOpen: () => void }) {
  return (
    <span className="sticky left-0 inline-flex max-w-[calc(100vw-2*var(--page-pad))] flex-wrap items-baseline gap-x-4">
      <span className="text-area text-ink">{area.name}</span>
      <span className="text-quiet text-ink2">
        {formatCount(area.spaces, `${area.spaceKind} space`)}, never below {area.safeMinimum}
        {area.bedStep > 1 ? `, opened by ${String(area.bedStep)}` : ''}
      </span>
      <Button look="quiet" className="text-quiet" aria-expanded={open} onClick={onOpen}>
        {open ? 'Close half hours' : 'Half hours'}
        <span className="sr-only"> of {area.name}</span>
      </Button>
    </span>
  );
}

/** The plan of an ordinary week: each area's shifts by day. */
export function PlanGrid({
  site,
  draft,
  required,
  risk,
  openArea,
  onOpenArea,
  onChange,
}: {
  site: Site;
  draft: PlanDraft;
  /** Null: not known yet. */
  required: ReadonlyMap<string, RequiredCell> | null;
  /** The planning risk that `required` is for. */
  risk: number;
  /** The area whose half hours stand open. */
  openArea: string | null;
  onOpenArea: (areaId: string | null) => void;
  /** Missing: for looking only. */
  onChange: ((action: DraftAction) => void) | undefined;
}) {
  const cells = useMemo(() => planCells(site.shifts), [site.shifts]);
  const places = useMemo(
    () =>
      site.areas.flatMap((area) =>
        cells.map(({ shift, days: own }, index) => ({ area, shift, own, first: index === 0 })),
      ),
    [site.areas, cells],
  );
  const rows: GridRow[] = places.map(({ area, shift, first }) => ({
    key: `${area.id} ${shift.id}`,
    header: (
      <>
        <span className="sr-only">{area.name}, </span>
        {shift.name} <span className="tight font-semibold text-ink2 max-sm:block">{clockText(shift.startMinute)}</span>
      </>
    ),
    ...(first
      ? {
          group: (
            <AreaHead
              area={area}
              open={openArea === area.id}
              onOpen={() => onOpenArea(openArea === area.id ? null : area.id)}
            />
          ),
        }
      : {}),
  }));
  const editing = onChange
    ? {
        onEdit: (edits: { row: number; column: number; beds: number | null }[]) =>
          onChange({
            type: 'edit',
            edits: edits.map(({ row, column, beds }): PlanEdit => {
              const { area, own } = places[row];
              return { areaId: area.id, halfHours: own[column], beds };
            }),
          }),
        onUndo: () => onChange({ type: 'undo' }),
        onRedo: () => onChange({ type: 'redo' }),
      }
    : {};
  return (
    <FigureGrid
      caption="Staffed beds by area, shift and day of the week"
      corner="Area and shift"
      rows={rows}
      columns={columns}
      cellAt={(row, column) => {
        const { area, shift, own } = places[row];
        return planCell({
          draft,
          area,
          halfHours: own[column],
          name: `${area.name}, ${shift.name}, ${weekdayName(column + 1)}`,
          required: required === null ? null : required.get(cellKey(area.id, shift.name, column)),
          risk,
          timeZone: site.timeZone,
        });
      }}
      {...editing}
    />
  );
}
