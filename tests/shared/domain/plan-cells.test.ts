import { describe, expect, test } from 'vitest';
import { cellFigures, planCells } from '../../../shared/domain/plan-cells.ts';
import { shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

const shifts = [
  { name: 'Early', startMinute: 420, endMinute: 870 },
  { name: 'Late', startMinute: 840, endMinute: 1290 },
  { name: 'Night', startMinute: 1260, endMinute: 450 },
];

describe('cells of a plan', () => {
  test('hold every half hour of the week once, a night’s on the day on which it starts, in the order of time', () => {
    const cells = planCells(shifts);
    expect(cells.map(({ shift }) => shift.name)).toEqual(['Early', 'Late', 'Night']);
    expect(cells.flatMap(({ days }) => days.flat()).sort((a, b) => a - b)).toEqual(
      Array.from({ length: 336 }, (_, i) => i),
    );
    const [early, late, night] = cells.map(({ days }) => days);
    expect([early[0][0], early[0].length]).toEqual([14, 14]);
    expect([late[0][0], late[0].length]).toEqual([28, 14]);
    // Monday's night: 21:00 to Tuesday 07:00. Sunday's: to Monday 07:00, which the week begins with.
    expect([night[0][0], night[0].at(-1), night[0].length]).toEqual([42, 61, 20]);
    expect([night[6][0], night[6].at(-1), night[6].length]).toEqual([330, 13, 20]);
  });

  // Two ways to the same answer: the engine's shift in charge at an instant of a week without clock changes.
  test('agree with the shift in charge at every half hour of a week', () => {
    const zone = makeZone('Asia/Kolkata');
    const monday = Date.UTC(2026, 10, 30) / 1000 - 19_800;
    const times = shiftsBetween(zone, shifts, monday - 86_400, monday + 8 * 86_400);
    for (const { shift, days } of planCells(shifts)) {
      for (const [day, own] of days.entries()) {
        for (const halfHour of own) {
          // The week's Monday morning is Sunday's night of the week before.
          const wraps = day === 6 && halfHour < 48;
          const inCharge = shiftInCharge(times, monday + (halfHour + (wraps ? 336 : 0)) * 1800);
          expect(inCharge?.name).toBe(shift.name);
          expect(Math.floor((inCharge!.from - monday) / 86_400)).toBe(day);
        }
      }
    }
  });

  test('leave out a shift that is never in charge; none without shifts', () => {
    expect(planCells([])).toEqual([]);
    const twice = planCells([
      { name: 'A', startMinute: 0, endMinute: 0 },
      { name: 'B', startMinute: 0, endMinute: 0 },
    ]);
    expect(twice.map(({ shift, days }) => [shift.name, days.flat().length])).toEqual([['B', 336]]);
  });

  test('show one figure, a range, or a hole', () => {
    expect(cellFigures([3, 3, 3], [0, 1, 2])).toEqual({ low: 3, high: 3, hole: false });
    expect(cellFigures([3, 5, 4], [0, 1, 2])).toEqual({ low: 3, high: 5, hole: false });
    expect(cellFigures([3, null, 4], [0, 1])).toEqual({ low: 3, high: 3, hole: true });
    expect(cellFigures([null], [0])).toEqual({ low: null, high: null, hole: true });
  });
});
