import { Fragment } from 'react';
import type { Outlook } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { meetingAtHand } from '../../../shared/domain/bed-meeting.ts';
import { formatCount, formatNumber, formatTime, zoneOf } from '../../lib/format.ts';
import { meetingHours, meetingReach, meetingRows } from './bed-meeting.ts';
import type { MeetingNeed, MeetingRow } from './bed-meeting.ts';
import type { Board } from './tonight-board.ts';

/** What is asked for an area, in words. */
export function askInWords(row: MeetingRow, spaceKind: 'bed' | 'chair', timeOf: (at: number) => string): string {
  const { ask } = row;
  if (!ask) return 'Count it first';
  if (ask.beds === 0 || ask.from === null) return 'Nothing';
  const missing = ask.missing > 0 ? `, ${String(ask.missing)} of them do not exist` : '';
  const beds = `${formatCount(ask.beds, `more ${spaceKind}`)} from ${timeOf(ask.from)}${missing}`;
  if (!ask.boardingOut) return beds;
  return `${beds}; or ${formatCount(ask.boardingOut.patients, 'boarding patient')} out by ${timeOf(ask.boardingOut.by)}`;
}

function Need({ need }: { need: MeetingNeed | null }) {
  if (!need) return <>–</>;
  return (
    <span className="whitespace-nowrap">
      {formatNumber(need.p50)}–{formatNumber(need.p90)}{' '}
      <span className="text-ink2 max-sm:hidden">of {formatNumber(need.staffed)}</span>
    </span>
  );
}

/** The bed meeting's one table: present, boarding, need in four and eight hours, and the ask. */
export function BedMeeting({ board, outlook, site, now }: { board: Board; outlook: Outlook; site: Site; now: number }) {
  const hours = meetingHours(board, now);
  const rows = meetingRows(board, outlook, now);
  const total = (field: 'present' | 'boarding') =>
    rows.some((row) => row[field] === null) ? null : rows.reduce((sum, row) => sum + (row[field] ?? 0), 0);
  const ahead = board.department.columns.filter((column) => column.kind === 'forecast');
  const timeOf = (at: number) => formatTime(at, site.timeZone);
  const whole: MeetingRow = {
    name: 'Whole department',
    present: total('present'),
    boarding: total('boarding'),
    countedAt: null,
    need: hours.map(({ place }) => (place >= 0 && board.department.counted ? ahead[place] : null)),
    ask: null,
  };
  const meeting = meetingAtHand(zoneOf(site.timeZone), site.bedMeetingMinutes, now);
  return (
    <>
      <table className="w-full border-collapse text-right max-sm:text-label max-sm:font-stretch-[88%]">
        <caption className="pb-2 text-left font-bold">
          {site.name} at {timeOf(now)}
          {meeting === null
            ? ''
            : meeting > now
              ? `; the next meeting is at ${timeOf(meeting)}`
              : `, for the meeting of ${timeOf(meeting)}`}
        </caption>
        <thead>
          <tr className="border-b-2 border-edge align-bottom text-quiet text-ink2 max-sm:text-small">
            <th scope="col" className="py-2 text-left">
              Area
            </th>
            <th scope="col" className="px-1 sm:px-2">
              Present
            </th>
            <th scope="col" className="px-1 sm:px-2">
              Boarding
            </th>
            {hours.map(({ place, at }, index) => (
              <th key={meetingReach[index]} scope="col" className="px-1 sm:px-2">
                Need at {place < 0 ? `+${String(meetingReach[index])} h` : timeOf(at)}
              </th>
            ))}
            <th scope="col" className="pl-4 text-left max-sm:hidden">
              The ask
            </th>
          </tr>
        </thead>
        <tbody>
          {[...rows, whole].map((row, index) => {
            const area = board.areas.at(index)?.area;
            const text =
              row === whole || !area ? 'If every bed could take any patient' : askInWords(row, area.spaceKind, timeOf);
            const ask = row.ask && row.ask.beds > 0 ? <b>{text}</b> : <span className="text-ink2">{text}</span>;
            return (
              <Fragment key={area?.id ?? 'whole'}>
                <tr className="border-t border-hair align-top">
                  <th scope="row" className="py-2 text-left font-bold">
                    {row.name}
                    {row.countedAt !== null ? (
                      <span className="block text-small font-semibold text-ink2">counted {timeOf(row.countedAt)}</span>
                    ) : area ? (
                      <span className="block text-small font-bold text-ink2">not counted</span>
                    ) : null}
                  </th>
                  <td className="px-1 py-2 sm:px-2">{row.present ?? '–'}</td>
                  <td className="px-1 py-2 sm:px-2">{row.boarding ?? '–'}</td>
                  {row.need.map((need, place) => (
                    <td key={meetingReach[place]} className="px-1 py-2 sm:px-2">
                      <Need need={need} />
                    </td>
                  ))}
                  <td className="py-2 pl-4 text-left max-sm:hidden">{ask}</td>
                </tr>
                {/* A phone has no room beside the figures: the ask stands beneath them. */}
                <tr className="sm:hidden">
                  <td colSpan={5} className="pb-2 text-left">
                    {ask}
                  </td>
                </tr>
              </Fragment>
            );
          })}
        </tbody>
      </table>
      <p className="mt-3 text-quiet text-ink2">
        Need is the median to P90, of the staffed beds in force then. The ask brings every hour of the next eight to the
        area’s limit or under it. Planning aid: a forecast is a range, and your escalation policy comes first.
      </p>
    </>
  );
}
