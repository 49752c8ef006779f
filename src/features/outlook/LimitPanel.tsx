import { formatChance } from '../../../shared/domain/risk-word.ts';
import { formatCount, formatTime } from '../../lib/format.ts';
import { pastHours } from './tonight-board.ts';
import type { BoardArea } from './tonight-board.ts';

/** Hung by a stem from the first hour past the limit: from when to when, what would help, and the site's own escalation text. */
export function LimitPanel({
  row,
  columnWidth,
  hiddenColumns,
  hourNames,
  timeZone,
}: {
  row: BoardArea;
  columnWidth: number;
  /** Columns that lie before the first view. */
  hiddenColumns: number;
  hourNames: readonly string[];
  timeZone: string;
}) {
  const { area, firstPast } = row;
  if (firstPast === null) return null;
  const over = row.chances.map((cell) => cell.chance > area.alertLimit);
  const run = over.slice(firstPast).indexOf(false);
  const last = (run < 0 ? over.length : firstPast + run) - 1;
  const most = Math.max(0, ...row.bedsToAdd.slice(firstPast, last + 1));
  const missing = Math.max(0, ...row.bedsThatDoNotExist.slice(firstPast, last + 1));
  const { boardingOut } = row.outlook;
  const unit = area.spaceKind === 'chair' ? 'chair' : 'bed';
  return (
    <div
      className="relative pt-2"
      style={{
        ['--stem' as string]: `${String((pastHours + firstPast) * columnWidth)}px`,
        ['--hidden' as string]: `${String(hiddenColumns * columnWidth)}px`,
      }}
    >
      <div aria-hidden="true" className="absolute top-0 left-(--stem) h-2.5 w-[3px] bg-ink" />
      <div className="limit-panel border-t-[3px] border-ink bg-paper px-4 py-3">
        <p className="font-extrabold">
          Past the {formatChance(area.alertLimit).replace(' ', '\u00a0')} limit{' '}
          {last > firstPast ? `from ${hourNames[firstPast]} to ${hourNames[last]}` : `at ${hourNames[firstPast]}`}.
        </p>
        {most > 0 ? (
          <p className="mt-1 flex flex-wrap items-center gap-x-3 text-ink2">
            <span>
              {formatCount(most, `${unit} more`, `${unit}s more`)} at most
              {missing > 0 ? `, of which ${formatCount(missing, 'does', 'do')} not exist` : ''}
              {boardingOut
                ? `; or ${formatCount(boardingOut.patients, 'boarding patient')} out by ${formatTime(boardingOut.by, timeZone)}`
                : ''}
              .
            </span>
            {/* A gap can be counted: one stroke a bed, hollow where the bed space does not exist. */}
            <span aria-hidden="true" className="flex gap-[3px]">
              {Array.from({ length: Math.min(most, 40) }, (_, index) => (
                <span key={index} className={`h-5 w-1 ${index < most - missing ? 'bg-s3' : 'border border-s3'}`} />
              ))}
            </span>
          </p>
        ) : null}
        {area.escalationNote ? (
          <p className="mt-1 whitespace-pre-line">{area.escalationNote}</p>
        ) : (
          <p className="mt-1 text-ink2">
            This site has entered no escalation text for {area.name}. Follow your escalation policy.
          </p>
        )}
      </div>
    </div>
  );
}
