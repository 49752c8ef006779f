import type { CareArea } from '../../../shared/api/sites.ts';
import { clockText, halfHourName } from '../../../shared/domain/clock-text.ts';
import { Button } from '../../components/Button.tsx';
import { weekdayName } from '../../lib/format.ts';
import { FigureGrid } from './FigureGrid.tsx';
import { planCell } from './plan-cell.ts';
import type { DraftAction, PlanDraft } from './plan-draft.ts';

const rows = [1, 2, 3, 4, 5, 6, 7].map((day) => ({ key: String(day), header: weekdayName(day) }));
const columns = Array.from({ length: 48 }, (_, index) => ({ key: String(index), header: clockText(index * 30) }));

/** One area by half hour of the week: where a plan changes within a shift. */
export function HalfHourGrid({
  area,
  draft,
  timeZone,
  onClose,
  onChange,
}: {
  area: CareArea;
  draft: PlanDraft;
  timeZone: string;
  onClose: () => void;
  onChange: ((action: DraftAction) => void) | undefined;
}) {
  const editing = onChange
    ? {
        onEdit: (edits: { row: number; column: number; beds: number | null }[]) =>
          onChange({
            type: 'edit',
            edits: edits.map(({ row, column, beds }) => ({ areaId: area.id, halfHours: [row * 48 + column], beds })),
          }),
        onUndo: () => onChange({ type: 'undo' }),
        onRedo: () => onChange({ type: 'redo' }),
      }
    : {};
  return (
    <section className="grid grid-cols-1 gap-2" aria-labelledby="half-hours">
      <div className="flex flex-wrap items-baseline justify-between gap-4">
        <h2 id="half-hours" className="text-section">
          {area.name} by half hour
        </h2>
        <Button look="quiet" onClick={onClose}>
          Close half hours
        </Button>
      </div>
      <FigureGrid
        caption={`Staffed beds of ${area.name} by half hour of the week`}
        corner="Day"
        rows={rows}
        columns={columns}
        narrow
        cellAt={(row, column) => {
          const halfHour = row * 48 + column;
          const name = `${area.name}, ${halfHourName(halfHour)}`;
          return planCell({ draft, area, halfHours: [halfHour], name, required: undefined, risk: 0, timeZone });
        }}
        {...editing}
      />
    </section>
  );
}
