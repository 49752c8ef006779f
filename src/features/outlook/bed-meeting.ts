import type { Outlook } from '../../../shared/api/outlooks.ts';
import type { Board, BoardArea } from './tonight-board.ts';

/** Hours ahead that a bed meeting looks at. */
export const meetingReach = [4, 8] as const;

export interface MeetingNeed {
  p50: number;
  p90: number;
  staffed: number;
}

export interface MeetingRow {
  name: string;
  present: number | null;
  boarding: number | null;
  /** When that was counted, UTC seconds; null where nothing was. */
  countedAt: number | null;
  /** At the first full hour four, then eight hours from now; null where the outlook does not reach or nothing is counted. */
  need: (MeetingNeed | null)[];
  /** Null where nothing was counted. */
  ask: {
    /** Most beds to add at any hour of the next eight, and of those that do not exist. */
    beds: number;
    missing: number;
    /** The first hour that they are needed at, UTC seconds. */
    from: number | null;
    boardingOut: { patients: number; by: number } | null;
  } | null;
}

/** The hour a meeting looks at: its place among the hours ahead, and when it is. */
export function meetingHours(board: Board, now: number): { place: number; at: number }[] {
  const ahead = board.hours.filter((hour) => !hour.past);
  return meetingReach.map((reach) => {
    const place = ahead.findIndex((hour) => hour.at >= now + reach * 3600);
    return { place, at: ahead[place]?.at ?? 0 };
  });
}

function needAt(row: Pick<BoardArea, 'columns'>, place: number): MeetingNeed | null {
  const column = row.columns.filter((candidate) => candidate.kind === 'forecast').at(place);
  return place < 0 || !column ? null : { p50: column.p50, p90: column.p90, staffed: column.staffed };
}

/** What a bed meeting needs of each area, in the site's own order. */
export function meetingRows(board: Board, outlook: Outlook, now: number): MeetingRow[] {
  const hours = meetingHours(board, now);
  const ahead = board.hours.filter((hour) => !hour.past);
  const last = hours[hours.length - 1].place;
  return board.areas.map((row) => {
    const census = outlook.census.find((entry) => entry.areaId === row.area.id);
    const adds = row.bedsToAdd.slice(0, last < 0 ? undefined : last + 1);
    const first = adds.findIndex((beds) => beds > 0);
    const beds = Math.max(0, ...adds);
    const { boardingOut } = row.outlook;
    return {
      name: row.area.name,
      present: row.counted ? (census?.present ?? null) : null,
      boarding: row.counted ? (census?.boarding ?? null) : null,
      countedAt: row.counted ? (census?.takenAt ?? null) : null,
      need: hours.map(({ place }) => (row.counted ? needAt(row, place) : null)),
      ask: row.counted
        ? {
            beds,
            missing: Math.max(0, ...row.bedsThatDoNotExist.slice(0, adds.length)),
            from: first < 0 ? null : ahead[first].at,
            // What was computed for a later hour is not this meeting's.
            boardingOut: first >= 0 && boardingOut && boardingOut.by <= ahead[adds.length - 1].at ? boardingOut : null,
          }
        : null,
    };
  });
}
