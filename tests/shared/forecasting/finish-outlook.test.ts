import { describe, expect, it } from 'vitest';
import { finishOutlook } from '../../../shared/forecasting/finish-outlook.ts';
import { highestExcess, makeNeedPart } from '../../../shared/forecasting/need-part.ts';
import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import type { AreaOutlook, OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { makeNeedRecorder } from '../../../shared/forecasting/record-need.ts';
import { makeReplicationState } from '../../../shared/forecasting/replication-state.ts';
import { buildNeedPlan } from '../../support/build-need-plan.ts';

// Everything here was worked out by hand from ten replications of three hours; no other source.

const hours = [3600, 7200, 10_800];
const within = highestExcess + 1;

/** Counts by value: [value, replications]. */
type Counts = [value: number, replications: number][];

function put(into: Int32Array, from: number, counts: Counts): void {
  for (const [value, count] of counts) into[from + value] = count;
}

function finish(
  area: Partial<OutlookInput['areas'][number]> & { beds: number; spaces: number; bedStep: number },
  fill: (part: NeedPart) => void,
): AreaOutlook {
  const hazards = Array.from({ length: 5 }, () => [0.1, 0.1, 0.1]);
  const plan = buildNeedPlan(
    [
      {
        rates: [1, 1, 1],
        hazards,
        shares: [1, 0, 0, 0],
        present: 20,
        presentShares: [1, 0, 0, 0, 0],
        boarding: 4,
        beds: area.beds,
      },
    ],
    1,
    [[0, 3]],
  );
  const part = makeNeedPart(plan, 0, 10);
  fill(part);
  const input: OutlookInput = {
    issuedAt: 0,
    timeZone: 'UTC',
    hours,
    areas: [
      {
        areaId: 'a',
        census: { takenAt: 0, present: 20, waiting: 0, boarding: 4 },
        staffedBeds: [{ at: 0, beds: area.beds }],
        safeMinimum: 10,
        alertLimit: 0.25,
        ...area,
      },
    ],
    undecided: null,
    planningRisk: 0.1,
    shifts: [{ name: 'Night', from: 0, to: 14_400 }],
    arrivalsSince: null,
    seed: 1,
    replications: 10,
  };
  return finishOutlook(input, { plan, lengthOfStay: 'exponential' }, [part], null).areas[0];
}

const large = { beds: 20, spaces: 22, bedStep: 2 };

function fillLarge(part: NeedPart): void {
  const { size, boarderSize } = part;
  // P(N > 20) is 0.2, 0.5 and 0.6.
  const laws: Counts[] = [
    [
      [18, 8],
      [21, 2],
    ],
    [
      [19, 5],
      [21, 2],
      [22, 1],
      [24, 2],
    ],
    [
      [20, 4],
      [23, 3],
      [25, 3],
    ],
  ];
  laws.forEach((law, h) => {
    put(part.need, h * size, law);
    put(part.within, h * within, [[0, 10]]);
  });
  put(part.shiftPeak, 0, [
    [20, 3],
    [23, 3],
    [25, 3],
    [27, 1],
  ]);
  part.shiftShort[0] = 7;
  // Of those short: how many boarders must go; the last entry is not even all four.
  put(part.boardersNeeded, boarderSize, [
    [1, 2],
    [2, 1],
    [4, 1],
    [5, 1],
  ]);
  put(part.boardersNeeded, 2 * boarderSize, [
    [3, 4],
    [5, 2],
  ]);
}

describe('remedies of an area told at the full hour', () => {
  const area = finish(large, fillLarge);

  it('adds whole steps until the chance is at the limit, and says which of them do not exist', () => {
    // 8:00 of 20 + 2: P(N > 22) = 0.2. Then 20 + 4 leaves P(N > 24) = 0.3 and 20 + 6 none.
    expect(area.firstHourPastLimit).toBe(1);
    expect(area.bedsToAdd).toEqual([0, 2, 6]);
    expect(area.bedsThatDoNotExist).toEqual([0, 0, 4]);
    expect(area.shortfallWithEverySpace.map(({ chance }) => chance)).toEqual([0, 0.2, 0.6]);
    expect(area.smallestChange).toEqual({ beds: 6, from: 7200, to: 10_800, doNotExist: 4 });
  });

  it('staffs a shift by steps from the safe minimum', () => {
    // P(peak > 25) = 0.1 and P(peak > 24) = 0.4; 10 + 8 · 2 = 26 of 22 spaces.
    expect(area.shifts[0]).toMatchObject({ bedsForPlanningRisk: 25, bedsForAlertLimit: 25, bedsToStaff: 26 });
    expect(area.shifts[0].bedsThatDoNotExist).toBe(4);
    expect(area.shifts[0].someTime.chance).toBe(0.7);
    expect(area.shifts[0].someTimeWithEverySpace.chance).toBe(0.7);
  });

  it('moves out the fewest boarders that bring every later hour of the shift to the limit', () => {
    // Two would do at 2:00 (2 of 10 stay short); at 3:00 it takes three, whereupon 2 of 10 do.
    expect(area.boardingOut).toEqual({ patients: 3, by: 7200 });
    const stuck = finish(large, (part) => {
      fillLarge(part);
      put(part.boardersNeeded, 2 * part.boarderSize, [
        [3, 3],
        [5, 3],
      ]);
    });
    expect(stuck.boardingOut).toBeNull();
  });
});

describe('remedies of a small area, told at any time within the hour', () => {
  const area = finish({ beds: 5, spaces: 6, bedStep: 1, safeMinimum: 2 }, (part) => {
    for (let h = 0; h < 3; h += 1) put(part.need, h * part.size, [[4, 10]]);
    put(part.within, 0, [[0, 10]]);
    put(part.within, within, [
      [0, 6],
      [1, 3],
      [2, 1],
    ]);
    put(part.within, 2 * within, [[0, 10]]);
    put(part.boardersNeeded, part.boarderSize, [
      [1, 3],
      [2, 1],
    ]);
  });

  it('goes by the excess within the hour, from the start of that hour', () => {
    expect(area.shortfall.map(({ chance }) => chance)).toEqual([0, 0, 0]);
    expect(area.firstHourPastLimit).toBe(1);
    expect(area.bedsToAdd).toEqual([0, 1, 0]);
    expect(area.bedsThatDoNotExist).toEqual([0, 0, 0]);
    expect(area.shortfallWithEverySpace.map(({ chance }) => chance)).toEqual([0, 0.1, 0]);
    expect(area.smallestChange).toEqual({ beds: 1, from: 3600, to: 7200, doNotExist: 0 });
    expect(area.boardingOut).toEqual({ patients: 1, by: 3600 });
  });
});

describe('makeNeedRecorder', () => {
  // Four patients from the first bin, six from the end of the fourth to that of the sixth, four again: with five beds one
  // too many for a quarter of an hour. The first boarder leaves in the fifth bin, the second does not.
  function record(wholeHour: boolean): NeedPart {
    const hazards = Array.from({ length: 5 }, () => [0.1, 0.1]);
    const plan = buildNeedPlan(
      [
        {
          rates: [1, 1],
          hazards,
          shares: [1, 0, 0, 0],
          present: 4,
          presentShares: [1, 0, 0, 0, 0],
          boarding: 2,
          beds: 5,
          wholeHour,
        },
      ],
      1,
      [[0, 2]],
    );
    const part = makeNeedPart(plan, 0, 1);
    // Replications and what records them work in one memory.
    const { trace } = makeReplicationState(plan, {});
    trace.moves.fill(0);
    for (const row of [0, plan.bins + 1]) {
      trace.moves[row] = 4;
      trace.moves[row + 3] = 2;
      trace.moves[row + 6] = -2;
    }
    trace.admittedIn.set([0, 1, 0]);
    trace.admittedOut.set([0, 0, 2]);
    trace.boarderBin[0].set([4, 100]);
    makeNeedRecorder(plan, part)(trace, 0);
    return part;
  }

  it('counts need at the full hour, excess within it, flows and bed-hours short', () => {
    const part = record(false);
    const at = (counts: Int32Array, size: number) => [0, 1].map((h) => counts.indexOf(1, h * size) - h * size);
    expect(at(part.need, part.size)).toEqual([4, 4]);
    expect(at(part.pooledNeed, part.pooledSize)).toEqual([4, 4]);
    expect(at(part.within, within)).toEqual([1, 0]);
    expect(at(part.pooledWithin, within)).toEqual([1, 0]);
    expect(at(part.arrivalsToAdmit, part.flowSize)).toEqual([1, 0]);
    expect(at(part.admittedLeaving, part.flowSize)).toEqual([0, 2]);
    expect(part.peak.indexOf(1)).toBe(6);
    expect(part.shiftPeak.indexOf(1)).toBe(6);
    expect(Array.from(part.shiftShort)).toEqual([1, 1]);
    expect(Array.from(part.someShort)).toEqual([0, 0]);
    expect(Array.from(part.bedHoursShort)).toEqual([0.25, 0.25]);
  });

  it('asks for boarders at the full hour, or for all of the hour where that is printed', () => {
    expect(record(false).boardersNeeded.some((count) => count > 0)).toBe(false);
    // One would do in the fourth bin; once he has left by himself it takes the second as well.
    expect(Array.from(record(true).boardersNeeded)).toEqual([0, 0, 1, 0, 0, 0, 0, 0]);
  });
});
