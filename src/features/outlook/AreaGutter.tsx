import { useId } from 'react';
import type { CareArea } from '../../../shared/api/sites.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { chanceInNights, formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { formatAge, formatCount, formatNumber, formatTime } from '../../lib/format.ts';
import { CensusFields, CensusSave } from './CensusFields.tsx';
import { StaffedTonight } from './StaffedTonight.tsx';
import type { BoardArea, SomeTime } from './tonight-board.ts';
import { useCensusEntryContext } from './use-census-entry.ts';

export interface Rights {
  enterCensus: boolean;
  changeBeds: boolean;
  acknowledge: boolean;
}

function whenInWords({ when }: SomeTime, timeZone: string): string {
  if (when.kind === 'tonight') return 'some time tonight';
  if (when.kind === 'before') return `some time before ${formatTime(when.at, timeZone)}`;
  return `some time in the ${when.name}${/shift/i.test(when.name) ? '' : ' shift'}`;
}

/** Word, mark and figure of the chance of any shortfall before a shift ends; an hour's chance is another thing. */
export function SomeTimeLine({
  someTime,
  timeZone,
  subject = '',
  inNights = false,
}: {
  someTime: SomeTime;
  timeZone: string;
  subject?: string;
  /** Adds what the chance means over many such nights. */
  inNights?: boolean;
}) {
  const { chance } = someTime.chance;
  const step = riskStep(chance);
  return (
    <p className="text-label text-ink2 tight">
      <RiskMark step={step} className="mr-1 inline-block h-4 w-5 align-[-2px] text-ink" />
      <span className={step >= 3 ? 'font-extrabold text-ink' : 'font-semibold'}>{riskWord(chance)}</span> {subject}
      {whenInWords(someTime, timeZone)}, <b className="text-ink">{formatChance(chance).replace(' ', '\u00a0')}</b>
      {inNights ? `: ${chanceInNights(chance)}` : null}
    </p>
  );
}

const captions = ['Present', 'Waiting', 'Boarding', 'Staffed'];

/** The captions of the four figures; once above the areas and again under an open row. */
export function FigureCaptions({ staffed = true }: { staffed?: boolean }) {
  return (
    <div className="grid grid-cols-4 gap-1.5 text-center text-small font-semibold text-ink2 tighter" aria-hidden="true">
      {captions.slice(0, staffed ? 4 : 3).map((caption) => (
        <span key={caption}>{caption}</span>
      ))}
    </div>
  );
}

/** An area's name, its risk in words, and its four figures: present, waiting, boarding, staffed beds now. */
export function AreaGutter({
  area,
  index,
  row,
  siteId,
  timeZone,
  now,
  rights,
  open,
  toggle,
}: {
  area: CareArea;
  index: number;
  /** Null while there is no outlook. */
  row: BoardArea | null;
  siteId: string;
  timeZone: string;
  now: number;
  rights: Rights;
  /** The captions stand under the figures. */
  open: boolean;
  /** Opens and closes the row; absent where there is nothing to open. */
  toggle?: { open: boolean; onToggle: () => void };
}) {
  const { census } = useCensusEntryContext();
  const formId = useId();
  const counted = census?.areas.find((candidate) => candidate.areaId === area.id);
  const inForce = row && row.staffed.length > 0 ? bedsAt(row.staffed, now) : null;
  const limit = `${String(Math.round(area.alertLimit * 100))}\u00a0%`;
  const firstPast = row?.firstPast ?? null;
  const toAdd = Math.max(0, ...(row?.bedsToAdd ?? []));
  return (
    <div>
      <div className="flex flex-wrap items-baseline justify-between gap-x-3">
        <h3 className="text-area font-stretch-[92%]">
          {toggle ? (
            <button
              type="button"
              aria-expanded={toggle.open}
              onClick={toggle.onToggle}
              className="inline-flex min-h-6 cursor-pointer items-center gap-1.5 [font-weight:inherit] hover:underline"
            >
              {area.name}
              <svg
                viewBox="0 0 10 10"
                aria-hidden="true"
                className="size-2.5 print:hidden"
                fill="none"
                stroke="var(--edge)"
                strokeWidth="2"
              >
                <path d={toggle.open ? 'M1 7L5 3L9 7' : 'M1 3L5 7L9 3'} />
              </svg>
            </button>
          ) : (
            area.name
          )}
        </h3>
        {row?.counted === false || !counted ? <p className="text-label font-bold text-ink2">Not counted</p> : null}
      </div>
      {row?.someTime ? <SomeTimeLine someTime={row.someTime} timeZone={timeZone} inNights={open} /> : null}
      {row && firstPast !== null ? (
        <p className="text-label text-ink2 tight">
          Past {limit} from{' '}
          <b className="text-ink">
            {formatTime(row.columns.filter((column) => column.kind === 'forecast')[firstPast].at, timeZone)}
          </b>
          {toAdd > 0 ? (
            <>
              : up to{' '}
              <b className="text-ink">{formatCount(toAdd, `more ${area.spaceKind}`, `more ${area.spaceKind}s`)}</b>
            </>
          ) : null}
        </p>
      ) : null}
      {counted && now - counted.takenAt > 2 * 3600 ? (
        <p className="text-label font-extrabold text-ink">Counted {formatAge(now - counted.takenAt)} ago</p>
      ) : null}
      {row && (!row.counted || !counted || now - counted.takenAt > 2 * 3600) ? (
        <Expected row={row} timeZone={timeZone} />
      ) : null}
      <div className="mt-1.5 grid grid-cols-4 gap-1.5">
        {rights.enterCensus ? (
          <CensusFields index={index} areaName={area.name} formId={formId} />
        ) : (
          (['present', 'waiting', 'boarding'] as const).map((field) => (
            <Figure key={field} name={`${area.name}, ${field}`} value={counted?.[field]} />
          ))
        )}
        {row === null ? null : rights.changeBeds ? (
          <StaffedTonight area={area} siteId={siteId} inForce={inForce} />
        ) : (
          <Figure name={`${area.name}, staffed now`} value={inForce} />
        )}
      </div>
      {open ? <FigureCaptions staffed={row !== null} /> : null}
      {rights.enterCensus ? <CensusSave index={index} timeZone={timeZone} /> : null}
    </div>
  );
}

/** What the model carries forward where no fresh count stands: marked as expected, beside the fields and never in them. */
function Expected({ row, timeZone }: { row: BoardArea; timeZone: string }) {
  const next = row.columns.find((column) => column.kind === 'forecast');
  if (!next) return null;
  return (
    <p className="text-label text-ink2 italic tight">
      Expected at {formatTime(next.at, timeZone)}: {formatNumber(next.p50)} present, up to {formatNumber(next.p90)} at
      P90 (not counted)
    </p>
  );
}

function Figure({ name, value }: { name: string; value: number | null | undefined }) {
  return (
    <span className="py-1 text-center text-census">
      <span className="sr-only">{name}: </span>
      {value ?? '–'}
    </span>
  );
}
