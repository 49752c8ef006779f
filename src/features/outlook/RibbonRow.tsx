import type { Outlook } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { skyTone } from '../../../shared/charts/daylight.ts';
import { Ribbon, ribbonHeight } from '../../../shared/charts/Ribbon.tsx';
import type { RibbonEvent } from '../../../shared/charts/Ribbon.tsx';
import { meetingsBetween } from '../../../shared/domain/bed-meeting.ts';
import { shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { Link } from 'react-router-dom';
import { Button } from '../../components/Button.tsx';
import { formatDay, formatHour, formatTime, formatWeekday, zoneOf } from '../../lib/format.ts';
import { BoardRow } from '../../components/BoardRow.tsx';
import { pastHours } from './tonight-board.ts';
import type { Board } from './tonight-board.ts';
import type { useRibbon } from '../../lib/use-ribbon.ts';

/** Where areas change their staffed beds within the hours ahead; many at one time are told together. */
function bedEvents(board: Board, outlook: Outlook, now: number): RibbonEvent[] {
  const events = new Map<number, string[]>();
  for (const { area } of board.areas) {
    const steps = outlook.staffedBeds.find((found) => found.areaId === area.id)?.steps ?? [];
    for (const [index, step] of steps.entries()) {
      if (index === 0 || step.at <= now) continue;
      const text = `${area.name} ${String(steps[index - 1].beds)} to ${String(step.beds)}`;
      events.set(step.at, [...(events.get(step.at) ?? []), text]);
    }
  }
  return [...events].map(([at, texts]) => ({
    at,
    text: texts.length === 1 ? texts[0] : `${String(texts.length)} areas change beds`,
  }));
}

/** Bed meetings within the hours ahead. */
function meetingEvents(board: Board, { timeZone, bedMeetingMinutes }: Site, now: number): RibbonEvent[] {
  const last = board.hours[board.hours.length - 1].at;
  return meetingsBetween(zoneOf(timeZone), bedMeetingMinutes, now, last).map((at) => ({ at, text: 'Bed meeting' }));
}

/** The ribbon with its flag of now, and in the gutter how to step it. */
export function RibbonRow({
  board,
  outlook,
  site,
  now,
  columnWidth,
  hiddenColumns,
  ribbon,
  lastNightHref,
  then = false,
}: {
  board: Board;
  outlook: Outlook;
  site: Site;
  now: number;
  columnWidth: number;
  hiddenColumns: number;
  ribbon: Pick<ReturnType<typeof useRibbon>, 'place' | 'earlier' | 'later' | 'backToNow'>;
  /** Where last night's outlook stands; null if there is none. */
  lastNightHref: string | null;
  /** The board is that of an earlier time. */
  then?: boolean;
}) {
  const zone = zoneOf(site.timeZone);
  const { hours } = board;
  const first = hours[0].at;
  const last = hours[hours.length - 1].at + 3600;
  const shifts = shiftsBetween(zone, site.shifts, first, last);
  const starts = new Set(shifts.map((shift) => shift.from));
  return (
    <BoardRow
      ruled={false}
      gutter={
        <div className="flex h-full flex-wrap items-end gap-x-5 gap-y-1 text-side print:hidden">
          {lastNightHref ? (
            <Link
              to={lastNightHref}
              className="inline-flex min-h-6 items-center text-body leading-tight font-bold text-ink underline decoration-edge underline-offset-4 hover:decoration-2"
            >
              Last night
            </Link>
          ) : null}
          <Button look="quiet" onClick={ribbon.earlier} disabled={ribbon.place.atStart}>
            Earlier
          </Button>
          <Button look="quiet" onClick={ribbon.later} disabled={ribbon.place.atEnd}>
            Later
          </Button>
          {ribbon.place.moved ? (
            <Button look="quiet" onClick={ribbon.backToNow}>
              {then ? 'Back to then' : 'Back to now'}
            </Button>
          ) : null}
        </div>
      }
      strip={
        <div className="relative pt-1.5">
          <p className="sr-only">
            Hours from {formatTime(first, site.timeZone)} to {formatTime(last - 3600, site.timeZone)}.{' '}
            {then ? 'As it stood at' : 'Now'} {formatTime(now, site.timeZone)}.{' '}
            {shifts
              .map(
                (shift) =>
                  `${shift.name}, ${formatTime(shift.from, site.timeZone)} to ${formatTime(shift.to, site.timeZone)}`,
              )
              .join('; ')}
            .
          </p>
          <div
            aria-hidden="true"
            className="absolute top-0 z-10 rounded-t-button rounded-br-button bg-act px-2.5 py-1 text-side leading-tight font-extrabold whitespace-nowrap text-act-ink"
            style={{ left: pastHours * columnWidth - 1.5 }}
          >
            {then ? 'Then' : 'Now'} {formatWeekday(now, site.timeZone)} {formatTime(now, site.timeZone)}
          </div>
          <Ribbon
            id="ribbon"
            columnWidth={columnWidth}
            viewStart={hiddenColumns * columnWidth}
            hours={hours.map((hour, index) => ({
              at: hour.at,
              label: formatHour(hour.at, site.timeZone),
              sky: skyTone(zone, hour.at),
              day:
                index > 0 && formatDay(hour.at, site.timeZone) !== formatDay(hours[index - 1].at, site.timeZone)
                  ? formatDay(hour.at, site.timeZone)
                  : null,
            }))}
            shifts={shifts}
            events={[...bedEvents(board, outlook, now), ...meetingEvents(board, site, now)]
              .filter((event) => !starts.has(event.at))
              .sort((a, b) => a.at - b.at)}
            timeOf={(at) => formatTime(at, site.timeZone)}
          />
          <HandoverGuides board={board} shifts={shifts} columnWidth={columnWidth} now={now} />
        </div>
      }
    />
  );
}

/** A thin line down the whole board where each shift begins. */
function HandoverGuides({
  board,
  shifts,
  columnWidth,
  now,
}: {
  board: Board;
  shifts: readonly { from: number }[];
  columnWidth: number;
  now: number;
}) {
  return shifts.flatMap((shift) => {
    const place = board.hours.findIndex((hour) => hour.at === shift.from);
    if (place < 1 || shift.from <= now) return [];
    return [
      <i
        key={shift.from}
        aria-hidden="true"
        className="pointer-events-none absolute h-[200rem] border-l-[1.5px] border-dashed border-edge opacity-60"
        style={{ left: place * columnWidth, top: ribbonHeight + 6 }}
      />,
    ];
  });
}
