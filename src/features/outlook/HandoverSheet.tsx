import type { NightLog } from '../../../shared/api/night-log.ts';
import type { Outlook, Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { handoverSummary } from '../../../shared/forecasting/handover-summary.ts';
import { staleCensusSeconds } from '../../../shared/forecasting/outlook-sentence.ts';
import { Mark } from '../../components/Mark.tsx';
import { formatAge, formatDate, formatDay, formatTime, zoneOf } from '../../lib/format.ts';
import { HandoverDone } from './HandoverDone.tsx';
import { handoverShift } from './handover-shift.ts';
import { HandoverTable } from './HandoverTable.tsx';
import { sentenceOf } from './sentence-of.ts';
import { buildBoard } from './tonight-board.ts';
import './handover-sheet.css';

/** The handover on one A4 page in grey: the sentence, each area through the coming shift, what was done, lines for what is to do. */
export function HandoverSheet({
  tonight,
  outlook,
  site,
  log,
}: {
  tonight: Tonight;
  outlook: Outlook;
  site: Site;
  /** Null if it could not be loaded: the sheet says so. */
  log: NightLog | null;
}) {
  const { now } = tonight;
  const { timeZone } = site;
  const zone = zoneOf(timeZone);
  const board = buildBoard(tonight, outlook, site, zone);
  const shift = handoverShift(zone, site.shifts, now);
  const sentence = sentenceOf(tonight, site);
  const censusOf = (areaId: string) => outlook.census.find((entry) => entry.areaId === areaId);
  const summary = handoverSummary({
    result: outlook.result,
    areas: site.areas.map((area) => {
      const count = censusOf(area.id);
      return {
        areaId: area.id,
        name: area.name,
        spaceKind: area.spaceKind,
        spaces: area.spaces,
        alertLimit: area.alertLimit,
        census:
          !count ||
          count.takenAt === null ||
          count.present === null ||
          count.waiting === null ||
          count.boarding === null
            ? null
            : { takenAt: count.takenAt, present: count.present, waiting: count.waiting, boarding: count.boarding },
      };
    }),
    shift,
    done: log?.entries ?? [],
    now,
    zone,
  });
  const taken = outlook.census.flatMap((entry) => (entry.takenAt === null ? [] : [entry.takenAt]));
  const oldest = taken.length > 0 ? Math.min(...taken) : null;
  const useUntil = oldest === null ? null : oldest + staleCensusSeconds;
  const shiftName = /shift/i.test(shift.name) ? shift.name : `${shift.name} shift`;

  return (
    <article className="handover-sheet">
      <div className="flex items-center justify-between gap-4 border-b border-edge pb-2">
        <p className="flex items-center gap-2">
          <Mark className="size-7" />
          <b>Shoalmark</b> <span className="font-semibold">{site.name}</span>
        </p>
        <p className="text-right text-quiet text-ink2">
          Handover to the {shiftName}, {formatTime(shift.from, timeZone)} to {formatTime(shift.to, timeZone)}.{' '}
          {formatDay(now, timeZone, 'short')}, {formatTime(now, timeZone)}
        </p>
      </div>
      <h1 className="mt-2 text-[1.5rem] leading-tight [font-weight:800]">
        {sentence?.headline.replace(/ %/g, '\u00a0%')}
      </h1>
      <p className="mt-1">{summary.join(' ').replace(/ %/g, '\u00a0%')}</p>
      <div className="mt-2 flex flex-wrap items-baseline justify-between gap-x-6 border-y-2 border-ink py-1">
        <p className="text-h2">
          {useUntil === null
            ? 'Do not use: no area has a census.'
            : useUntil < now
              ? `Do not use: the census is ${formatAge(now - (oldest ?? now))} old.`
              : `Do not use after ${formatTime(useUntil, timeZone)}, ${formatDay(useUntil, timeZone, 'short')}.`}
        </p>
        <p className="text-quiet text-ink2">
          {oldest === null ? null : `Census ${formatTime(oldest, timeZone)}. `}Model{' '}
          {formatAge(now - outlook.model.fittedAt)} old.
        </p>
      </div>
      <HandoverTable {...{ board, outlook, shift, shiftName, site }} />
      <HandoverDone {...{ log, site, board }} />
      <div className="mt-3 text-[0.75rem] leading-snug text-ink2">
        {tonight.cautions.map((caution) => (
          <p key={caution.kind + caution.text} className="font-bold text-ink">
            {caution.text}
          </p>
        ))}
        <p>
          <b className="text-ink">Planning aid.</b> Not for decisions about any individual patient. A forecast is a
          range: act on the percentile your policy names. Follow your hospital’s clinical governance, escalation policy
          and local law; a licensed clinician’s judgement comes first. It does not foresee a major incident or a sudden
          closure.
        </p>
        <p>
          Outlook issued {formatTime(outlook.issuedAt, timeZone)}, model fitted{' '}
          {formatDate(outlook.model.fittedAt, timeZone)}, seed {outlook.seed}, software {outlook.softwareVersion}.
        </p>
      </div>
    </article>
  );
}
