import { useState } from 'react';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import { Button } from '../../components/Button.tsx';
import { formatCount, formatTime } from '../../lib/format.ts';
import { AcknowledgeForm } from './AcknowledgeForm.tsx';
import { AcknowledgedLine } from './AcknowledgedLine.tsx';
import { askedHours } from './asked-hours.ts';
import { pastHours } from './tonight-board.ts';
import type { BoardArea } from './tonight-board.ts';

/**
 * Hung by a stem from the first hour past the limit: from when to when, what would help, the site's own
 * escalation text, and where to say what was done. Acknowledged, it folds to who, when and what, until an hour
 * passes the limit that nobody has acknowledged, or the next shift comes in.
 */
export function LimitPanel({
  row,
  siteId,
  outlookId,
  mayAcknowledge,
  note,
  onNote,
  columnWidth,
  hiddenColumns,
  hourNames,
  timeZone,
}: {
  row: BoardArea;
  siteId: string;
  outlookId: string;
  mayAcknowledge: boolean;
  note: string;
  onNote: (note: string) => void;
  columnWidth: number;
  /** Columns that lie before the first view. */
  hiddenColumns: number;
  hourNames: readonly string[];
  timeZone: string;
}) {
  const [adding, setAdding] = useState(false);
  const { area, firstPast } = row;
  if (firstPast === null) return null;
  const asked = askedHours(row);
  const folded = row.acknowledgements.length > 0 && asked.length === 0 && !adding;
  return (
    <div
      className="relative pt-2"
      style={{
        ['--stem' as string]: `${String((pastHours + firstPast) * columnWidth)}px`,
        ['--hidden' as string]: `${String(hiddenColumns * columnWidth)}px`,
      }}
    >
      <div aria-hidden="true" className="absolute top-0 left-(--stem) h-2.5 w-[3px] bg-ink" />
      <div className="limit-panel z-[13] border-t-[3px] border-ink bg-paper px-4 py-3">
        {row.acknowledgements.length > 0 ? (
          <AcknowledgedLine
            made={row.acknowledgements}
            timeZone={timeZone}
            action={
              folded && mayAcknowledge ? (
                <Button look="quiet" onClick={() => setAdding(true)}>
                  Add to this note
                </Button>
              ) : null
            }
          />
        ) : null}
        {folded ? null : (
          <>
            <PastLimit row={row} firstPast={firstPast} hourNames={hourNames} timeZone={timeZone} />
            {row.acknowledgements.length > 0 && asked.length > 0 ? (
              <p className="mt-1 font-extrabold">
                {row.acknowledgements.some((made) => made.at >= row.since)
                  ? 'Not acknowledged yet'
                  : 'Acknowledged by the shift before; not by this one yet'}
                : {asked.map((hour) => formatTime(hour, timeZone)).join(', ')}.
              </p>
            ) : null}
            {area.escalationNote ? (
              <p className="mt-1 whitespace-pre-line">{area.escalationNote}</p>
            ) : (
              <p className="mt-1 text-ink2">
                This site has entered no escalation text for {area.name}. Follow your escalation policy.
              </p>
            )}
            {row.pastTonight.length === 0 ? (
              <p className="mt-1 text-ink2">That is after tonight: there is nothing to acknowledge yet.</p>
            ) : mayAcknowledge ? (
              <AcknowledgeForm
                {...{ areaId: area.id, outlookId, siteId, note, onNote }}
                onDone={() => setAdding(false)}
              />
            ) : null}
          </>
        )}
      </div>
    </div>
  );
}

/** Runs of hours past the limit, by place among the hours ahead: those of tonight, or else the first to come. */
function runsPastLimit(row: BoardArea, firstPast: number): { first: number; last: number }[] {
  const ahead = row.columns.filter((column) => column.kind === 'forecast');
  const runs: { first: number; last: number }[] = [];
  row.chances.forEach(({ chance }, place) => {
    if (!(chance > row.area.alertLimit)) return;
    const run = runs.at(-1);
    if (run?.last === place - 1) run.last = place;
    else runs.push({ first: place, last: place });
  });
  const tonight = runs.filter(({ first }) => row.pastTonight.includes(ahead[first].at));
  return tonight.length > 0 ? tonight : runs.filter(({ first }) => first === firstPast);
}

/** From when to when, how many beds, or how many boarding patients. */
function PastLimit({
  row,
  firstPast,
  hourNames,
  timeZone,
}: {
  row: BoardArea;
  firstPast: number;
  hourNames: readonly string[];
  timeZone: string;
}) {
  const { area } = row;
  const runs = runsPastLimit(row, firstPast);
  const places = runs.flatMap(({ first, last }) => Array.from({ length: last - first + 1 }, (_, step) => first + step));
  const most = Math.max(0, ...places.map((place) => row.bedsToAdd[place]));
  const missing = Math.max(0, ...places.map((place) => row.bedsThatDoNotExist[place]));
  const { boardingOut } = row.outlook;
  const unit = area.spaceKind === 'chair' ? 'chair' : 'bed';
  return (
    <>
      <p className="font-extrabold">
        Past the {formatChance(area.alertLimit).replace(' ', '\u00a0')} limit{' '}
        {runs
          .map(({ first, last }) =>
            last > first ? `from ${hourNames[first]} to ${hourNames[last]}` : `at ${hourNames[first]}`,
          )
          .join(', again ')}
        .
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
    </>
  );
}
