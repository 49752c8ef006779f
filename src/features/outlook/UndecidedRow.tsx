import { formatTime } from '../../lib/format.ts';
import { BoardRow } from '../../components/BoardRow.tsx';
import { DepartmentFields } from './DepartmentFields.tsx';
import type { Rights } from './AreaGutter.tsx';
import { useCensusEntryContext } from './use-census-entry.ts';

/** Waiting patients whose area is not decided; ambulances that hold are among them. */
export function UndecidedRow({ rights, timeZone }: { rights: Rights; timeZone: string }) {
  const { census } = useCensusEntryContext();
  const undecided = census?.undecided;
  return (
    <BoardRow
      gutter={
        <div className="grid gap-1.5">
          <div className="flex items-baseline justify-between gap-3">
            <h3 className="text-area font-stretch-[92%]">Area not decided</h3>
            <p className="text-label font-semibold text-ink2">
              {undecided ? `At ${formatTime(undecided.takenAt, timeZone)}` : 'Not counted'}
            </p>
          </div>
          {rights.enterCensus ? (
            <DepartmentFields
              fields={[
                { field: 'undecidedWaiting', label: 'Waiting' },
                { field: 'ambulancesHolding', label: 'Ambulances holding' },
              ]}
            />
          ) : (
            <p className="text-ink2">
              {undecided
                ? `${String(undecided.waiting)} waiting, ${undecided.ambulancesHolding === null ? 'ambulances not counted' : `${String(undecided.ambulancesHolding)} in ambulances that hold`}`
                : 'No figures.'}
            </p>
          )}
        </div>
      }
      strip={null}
    />
  );
}
