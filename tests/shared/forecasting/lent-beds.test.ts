import { describe, expect, it } from 'vitest';
import { lentBeds } from '../../../shared/forecasting/lent-beds.ts';
import { weekGaps } from '../../../shared/forecasting/week-gaps.ts';
import { issueWeekOutlook } from '../../../shared/forecasting/week-outlook.ts';
import type { WeekOutlookResult } from '../../../shared/forecasting/week-outlook-types.ts';
import { buildOutlookModel } from '../../support/build-outlook-model.ts';
import { buildWeekInput } from '../../support/build-week-input.ts';

const input = buildWeekInput({ replications: 300 });
/** Acute with too few beds, resuscitation with more than it needs, in steps of two. */
const areas = input.areas.map((area, a) => ({
  ...area,
  spaces: 40,
  bedStep: 2,
  staffedBeds: area.staffedBeds.map((step) => ({ ...step, beds: a === 0 ? 17 : 16 })),
}));
const result = issueWeekOutlook(buildOutlookModel(), { ...input, areas });
const gaps = weekGaps(result, input.issuedAt);
const may = [
  { id: 'acute', lendsTo: [], bedStep: 2 },
  { id: 'resuscitation', lendsTo: ['acute'], bedStep: 2 },
];

describe('lentBeds', () => {
  it('lends at most what is lacking and never brings the lender past the risk or below its safe minimum', () => {
    const lent = lentBeds(result, gaps, may);
    expect(lent.flat().length).toBeGreaterThan(0);
    gaps.forEach(({ shift, need }, g) => {
      const beds = lent[g].reduce((sum, one) => sum + one.beds, 0);
      expect(beds).toBeLessThanOrEqual(need.bedsToAdd);
      expect(beds % 2).toBe(0);
      const own = result.areas[1].shifts[result.shifts.findIndex(({ from }) => from === shift.from)];
      expect(own.staffedLeast - beds).toBeGreaterThanOrEqual(own.bedsToStaff);
    });
    // The lender's beds less what it lends, simulated again on the same seed: still within the planning risk.
    const first = gaps.findIndex((_, g) => lent[g].length > 0);
    const { shift } = gaps[first];
    const less = areas.map((area, a) =>
      a === 1
        ? { ...area, staffedBeds: area.staffedBeds.map((step) => ({ ...step, beds: 16 - lent[first][0].beds })) }
        : area,
    );
    const then = issueWeekOutlook(buildOutlookModel(), { ...input, areas: less });
    const s = then.shifts.findIndex(({ from }) => from === shift.from);
    expect(then.areas[1].shifts[s].someTime).toBeLessThanOrEqual(input.planningRisk);
  });

  it('counts every bed once, and neither who may not lend, was not counted nor needs beds itself lends any', () => {
    const twice = lentBeds(result, [gaps[0], gaps[0]], may);
    const s = result.shifts.findIndex(({ from }) => from === gaps[0].shift.from);
    const { staffedLeast, bedsToStaff } = result.areas[1].shifts[s];
    const total = twice.flat().reduce((sum, one) => sum + one.beds, 0);
    expect(total).toBeLessThanOrEqual(staffedLeast - bedsToStaff);
    expect(lentBeds(result, gaps, []).flat()).toEqual([]);
    const none = may.map((one) => ({ ...one, lendsTo: [] }));
    expect(lentBeds(result, gaps, none).flat()).toEqual([]);
    const changed = (more: object, own: object): WeekOutlookResult => ({
      ...result,
      areas: [
        result.areas[0],
        { ...result.areas[1], ...more, shifts: result.areas[1].shifts.map((shift) => ({ ...shift, ...own })) },
      ],
    });
    expect(lentBeds(changed({ counted: false }, {}), gaps, may).flat()).toEqual([]);
    expect(lentBeds(changed({}, { bedsToAdd: 2 }), gaps, may).flat()).toEqual([]);
  });
});
