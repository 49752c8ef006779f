import { describe, expect, test } from 'vitest';
import { clockText, halfHourName, readClock } from '../../../shared/domain/clock-text.ts';
import { bedHoursAdded, changeTimes, comparePlans } from '../../../shared/domain/compare-plans.ts';
import { bedsFault, planFaults } from '../../../shared/domain/plan-faults.ts';

// The rules are the product's own (issue "Bad input"): no source outside it.
const acute = { id: 'acute', name: 'Acute', spaces: 24, safeMinimum: 12 };
const week = (beds: number | null) => new Array<number | null>(336).fill(beds);

describe('a plan', () => {
  test('names each cell that cannot be saved: a hole, below the safe minimum, beyond the spaces, 0, 500, 501, half a bed', () => {
    const plan = week(14);
    plan[0] = null;
    plan[14] = 11;
    plan[95] = 25;
    plan[335] = 0;
    expect(planFaults(acute, plan).map(({ at, message }) => `${at}: ${message}`)).toEqual([
      'Acute, Monday 00:00: No figure stands here: the plan would have a hole.',
      'Acute, Monday 07:00: 11 is below the safe minimum of 12.',
      'Acute, Tuesday 23:30: 25 is beyond the 24 bed spaces that exist.',
      'Acute, Sunday 23:30: 0 is below the safe minimum of 12.',
    ]);
    expect(bedsFault(acute, 500)).toBe('500 is beyond the 24 bed spaces that exist.');
    expect(bedsFault(acute, 501)).toBe('501 is above 500.');
    expect(bedsFault(acute, 14.5)).toBe('14.5 is not a whole number.');
    expect(bedsFault(acute, -1)).toBe('-1 is below 0.');
    expect([12, 24].map((beds) => bedsFault(acute, beds))).toEqual([null, null]);
    expect(bedsFault({ spaces: 0, safeMinimum: 0 }, 0)).toBeNull();
  });

  test('compared with another tells stretches, over midnight too, and the bed-hours that they add', () => {
    const after = week(14);
    for (let halfHour = 42; halfHour < 62; halfHour += 1) after[halfHour] = 16;
    after[100] = 13;
    const changes = comparePlans([{ areaId: 'acute', halfHours: week(14) }], [{ areaId: 'acute', halfHours: after }]);
    expect(changes).toEqual([
      { areaId: 'acute', from: 42, to: 62, before: 14, after: 16 },
      { areaId: 'acute', from: 100, to: 101, before: 14, after: 13 },
    ]);
    expect(changes.map(changeTimes)).toEqual(['Monday 21:00 to Tuesday 07:00', 'Wednesday 02:00 to 02:30']);
    // 2 beds for 10 hours, less 1 bed for half an hour.
    expect(bedHoursAdded(changes)).toBe(19.5);
    expect(comparePlans([], [{ areaId: 'acute', halfHours: week(14) }])).toEqual([
      { areaId: 'acute', from: 0, to: 336, before: null, after: 14 },
    ]);
    expect(comparePlans([{ areaId: 'gone', halfHours: week(3) }], [])).toHaveLength(1);
    expect(bedHoursAdded(comparePlans([], [{ areaId: 'acute', halfHours: week(14) }]))).toBe(0);
  });

  test('times of day are read and written', () => {
    expect(['07:30', '7:30', ' 00:00 ', '24:00', '12:60', 'noon', ''].map(readClock)).toEqual([
      450,
      450,
      0,
      null,
      null,
      null,
      null,
    ]);
    expect([0, 450, 1439].map(clockText)).toEqual(['00:00', '07:30', '23:59']);
    expect([0, 335].map(halfHourName)).toEqual(['Monday 00:00', 'Sunday 23:30']);
  });
});
