import { describe, expect, it } from 'vitest';
import type { NightLogEntry } from '../../../../shared/api/night-log.ts';
import { makeZone } from '../../../../shared/domain/zoned-time.ts';
import { meetingAtHand, meetingsBetween } from '../../../../shared/domain/bed-meeting.ts';
import { askInWords } from '../../../../src/features/outlook/BedMeeting.tsx';
import { meetingHours, meetingRows } from '../../../../src/features/outlook/bed-meeting.ts';
import { handoverShift } from '../../../../src/features/outlook/handover-shift.ts';
import { pastInWords } from '../../../../src/features/outlook/HandoverTable.tsx';
import { entryInWords } from '../../../../src/features/outlook/NightLogList.tsx';
import { nightName } from '../../../../src/features/outlook/NightLogPanel.tsx';
import { thenInWords } from '../../../../src/features/outlook/then-in-words.ts';
import { buildBoard } from '../../../../src/features/outlook/tonight-board.ts';
import { formatTime } from '../../../../src/lib/format.ts';
import { buildArea, buildAreaOutlook, buildSite, buildTonight, hours, now } from './build-tonight.ts';

/* Figures are the made-up ones of build-tonight; London is at UTC on that day. */
const zone = makeZone('Europe/London');
const site = buildSite();
const time = (at: number) => formatTime(at, 'Europe/London');
const boardOf = (tonight = buildTonight()) => buildBoard(tonight, tonight.outlook!, site, zone);

describe('an earlier outlook', () => {
  const known = (at: number, acute: number | null) => ({
    at,
    areas: [
      { areaId: 'acute', present: acute, staffed: 20, source: acute === null ? null : ('census' as const) },
      { areaId: 'obs', present: null, staffed: 6, source: null },
    ],
  });
  const board = boardOf(buildTonight({ past: [known(hours[0], 19), known(hours[1], null), known(hours[2], 24)] }));

  it('carries what then happened beside the forecast, and nothing where nothing is known', () => {
    const ahead = board.areas[0].columns.filter((column) => column.kind === 'forecast');
    expect(ahead.slice(0, 4).map((column) => column.actual)).toEqual([19, null, 24, undefined]);
    // The department's total needs every area.
    const whole = board.department.columns.filter((column) => column.kind === 'forecast');
    expect(whole.slice(0, 4).map((column) => column.actual)).toEqual([null, null, null, undefined]);
  });

  it('is told in words: short at the hours with more present than staffed', () => {
    expect(thenInWords(board, 'Europe/London')).toEqual([
      'Acute: short at 22:00 (24 present, 20 staffed), of 2 hours known.',
      'Observation: nothing is known of the hours since.',
    ]);
    expect(thenInWords(boardOf(), 'Europe/London')).toHaveLength(1);
  });
});

describe('the bed meeting', () => {
  it('looks at the first full hours four and eight hours on, and asks what brings the next eight under the limit', () => {
    const tonight = buildTonight({}, [
      buildAreaOutlook('acute', [0.1, 0.64, 0.3, 0, 0, 0, 0, 0, 0, 0, 0.9], {
        boardingOut: { patients: 2, by: hours[1] },
      }),
      buildAreaOutlook('obs', [], { counted: false }),
    ]);
    const board = boardOf(tonight);
    // 19:02 plus four and eight hours: 00:00 and 04:00.
    expect(meetingHours(board, now).map(({ at }) => time(at))).toEqual(['00:00', '04:00']);
    const [acute, obs] = meetingRows(board, tonight.outlook!, now);
    expect(acute).toEqual({
      name: 'Acute',
      present: 22,
      boarding: 6,
      countedAt: tonight.outlook!.census[0].takenAt,
      need: [
        { p50: 18, p90: 22, staffed: 20 },
        { p50: 18, p90: 22, staffed: 20 },
      ],
      ask: { beds: 3, missing: 0, from: hours[1], boardingOut: { patients: 2, by: hours[1] } },
    });
    expect(askInWords(acute, 'bed', time)).toBe('3 more beds from 21:00; or 2 boarding patients out by 21:00');
    // Missing never looks calm.
    expect(obs).toEqual({
      name: 'Observation',
      present: null,
      boarding: null,
      countedAt: null,
      need: [null, null],
      ask: null,
    });
    expect(askInWords(obs, 'bed', time)).toBe('Count it first');
  });

  it('is the one that runs or comes next', () => {
    const at = (hour: number, minute = 0) => Date.UTC(2026, 11, 1, hour, minute) / 1000;
    const minutes = [10 * 60, 16 * 60];
    expect(meetingAtHand(zone, minutes, at(10, 30))).toBe(at(10));
    expect(meetingAtHand(zone, minutes, at(10, 46))).toBe(at(16));
    expect(meetingAtHand(zone, minutes, at(20))).toBe(at(34));
    expect(meetingAtHand(zone, [], at(20))).toBeNull();
    expect(meetingsBetween(zone, minutes, at(10), at(34))).toEqual([at(10), at(16)]);
  });
});

describe('the handover', () => {
  it('goes to the shift that came in while two overlap, else to the next', () => {
    const at = (hour: number, minute: number) => Date.UTC(2026, 11, 1, hour, minute) / 1000;
    expect(handoverShift(zone, site.shifts, at(19, 2)).name).toBe('Night');
    expect(handoverShift(zone, site.shifts, at(21, 10)).from).toBe(at(21, 0));
    expect(handoverShift(zone, site.shifts, at(21, 31)).name).toBe('Late');
    expect(handoverShift(zone, [], at(12, 0))).toEqual({ name: 'Night', from: at(20, 0), to: at(32, 0) });
  });

  it('names the hours past the limit as spans', () => {
    const row = { area: buildArea(), chances: [0.3, 0.4, 0.1, 0.26, 0.25].map((chance) => ({ chance, se: 0 })) };
    expect(pastInWords(row, [0, 1, 2, 3, 4], (place) => time(hours[place]))).toBe('from 20:00 to 21:00 and at 23:00');
    expect(pastInWords(row, [2, 4], (place) => time(hours[place]))).toBeNull();
  });
});

describe('the night log in words', () => {
  const common = { id: 'e1', at: now, by: 'A. Brandt', outlookId: null };
  const entries: [NightLogEntry, string][] = [
    [
      {
        ...common,
        kind: 'census',
        takenAt: now - 1320,
        areas: [{ areaId: 'acute', present: 22, waiting: 3, boarding: 6 }],
        undecidedWaiting: 4,
      },
      'Census of 18:40: Acute 22, area not decided 4',
    ],
    [{ ...common, kind: 'census', takenAt: now, areas: [], undecidedWaiting: null }, 'Arrivals since midnight counted'],
    [
      {
        ...common,
        kind: 'staffed beds',
        areaId: 'acute',
        beds: 22,
        blocked: 1,
        fromAt: now,
        untilAt: hours[1],
        reason: 'Two bays opened',
      },
      'Acute staffed with 22 beds, 1 blocked, until 21:00: Two bays opened',
    ],
    [
      {
        ...common,
        kind: 'acknowledgement',
        areaId: 'acute',
        fromAt: hours[1],
        untilAt: hours[3],
        note: 'Manager called',
      },
      'Acute, past its limit from 21:00 to 23:00, acknowledged: Manager called',
    ],
  ];
  it.each(entries)('%#', (entry, words) => {
    expect(entryInWords(entry, site.areas, 'Europe/London')).toBe(words);
  });

  it('a night has the name of the day on which it starts', () => {
    // 1 December 2026 is a Tuesday.
    expect(nightName('2026-12-01')).toBe('Tuesday night');
  });
});
