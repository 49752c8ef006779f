import { describe, expect, it } from 'vitest';
import { compareNeed } from '../../../shared/forecasting/compare-need.ts';
import { prepareExact } from '../../../shared/forecasting/exact-outlook.ts';
import {
  issueOutlook,
  outlookFromParts,
  prepareOutlook,
  simulateOutlookPart,
} from '../../../shared/forecasting/issue-outlook.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { prepareNeed } from '../../../shared/forecasting/prepare-need.ts';
import { previewNeed } from '../../../shared/forecasting/preview-need.ts';
import { simulateNeedPart } from '../../../shared/forecasting/simulate-need.ts';
import { buildOutlookInput, buildOutlookModel } from '../../support/build-outlook-model.ts';
import { expectWithin } from '../../support/closeness.ts';

const model = buildOutlookModel();
const input = buildOutlookInput();
const result = issueOutlook(model, input);

/** Every number in a result, with its path. */
function numbers(value: unknown, path = 'result'): [string, number][] {
  if (typeof value === 'number') return [[path, value]];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, inner]) => numbers(inner, `${path}.${key}`));
}

function expectNoNaN(outlook: OutlookResult): void {
  for (const [path, value] of numbers(outlook)) expect(Number.isFinite(value), `${path} is ${value}`).toBe(true);
}

function withArea(a: number, more: Partial<OutlookInput['areas'][number]>): OutlookInput {
  return buildOutlookInput({ areas: input.areas.map((area, i) => (i === a ? { ...area, ...more } : area)) });
}

describe('issueOutlook', () => {
  it('gives the same digits again, from parts, and from models that went through JSON', () => {
    expect(issueOutlook(model, input)).toEqual(result);
    const parts = [
      [600, 1000],
      [0, 599],
      [599, 600],
    ].map(([from, to]) => simulateOutlookPart(prepareOutlook(model, input), from, to));
    expect(outlookFromParts(prepareOutlook(model, input), parts)).toEqual(result);
    const stored = JSON.parse(JSON.stringify({ model, input })) as { model: typeof model; input: OutlookInput };
    expect(issueOutlook(stored.model, stored.input)).toEqual(result);
    expect(issueOutlook(model, { ...input, seed: 100 })).not.toEqual(result);
  });

  it('has a finite figure everywhere, ascending percentiles, and chances between 0 and 1', () => {
    expectNoNaN(result);
    for (const area of [...result.areas, result.pooled]) {
      const { p5, p10, p25, p50, p75, p90, p95 } = area.need;
      for (let h = 0; h < input.hours.length; h += 1) {
        const row = [p5[h], p10[h], p25[h], p50[h], p75[h], p90[h], p95[h]];
        expect([...row].sort((a, b) => a - b)).toEqual(row);
        expect(area.headroom[h]).toBe(area.staffed[h] - p90[h]);
        expect(area.shortfallWithin[h].chance).toBeGreaterThanOrEqual(area.shortfall[h].chance);
        expect(area.shortfall[h].se).toBeGreaterThan(0);
      }
    }
    // With staffed beds of 24 that fall to 20 after nine hours.
    expect(result.areas[0].staffed.slice(8, 10)).toEqual([24, 20]);
  });

  it('some area short is at least each area and at most their sum', () => {
    for (let h = 0; h < input.hours.length; h += 1) {
      const each = result.areas.map((area) => area.shortfall[h].chance);
      expect(result.someAreaShort[h].chance).toBeGreaterThanOrEqual(Math.max(...each));
      expect(result.someAreaShort[h].chance).toBeLessThanOrEqual(each.reduce((a, b) => a + b, 0) + 1e-12);
    }
    result.someAreaShortByShift.forEach((chance, s) => {
      const each = result.areas.map((area) => area.shifts[s].someTime.chance);
      expect(chance.chance).toBeGreaterThanOrEqual(Math.max(...each));
    });
  });

  it('more staffed beds never raise a chance of shortfall, and need does not move', () => {
    let before = result;
    for (const more of [1, 2, 5]) {
      const steps = input.areas[0].staffedBeds.map((step) => ({ ...step, beds: step.beds + more }));
      const after = issueOutlook(model, withArea(0, { staffedBeds: steps }));
      expect(after.areas[0].need).toEqual(before.areas[0].need);
      after.areas[0].shortfall.forEach((chance, h) =>
        expect(chance.chance).toBeLessThanOrEqual(before.areas[0].shortfall[h].chance),
      );
      after.areas[0].shortfallWithin.forEach((chance, h) =>
        expect(chance.chance).toBeLessThanOrEqual(before.areas[0].shortfallWithin[h].chance),
      );
      after.areas[0].shifts.forEach((shift, s) =>
        expect(shift.someTime.chance).toBeLessThanOrEqual(before.areas[0].shifts[s].someTime.chance),
      );
      expect(after.areas[0].bedHoursShort.mean).toBeLessThanOrEqual(before.areas[0].bedHoursShort.mean);
      before = after;
    }
  });

  it('beds needed keep the risk and one bed fewer would not', () => {
    const { need, bedsNeeded } = result.areas[0];
    bedsNeeded.forEach((beds, h) => {
      // A risk of 10 % is the 90th percentile by definition.
      expect(beds).toBe(need.p90[h]);
    });
    for (const area of result.areas) {
      for (const shift of area.shifts) {
        expect(shift.bedsForPlanningRisk).toBeGreaterThanOrEqual(
          shift.bedsForAlertLimit - (area.areaId === 'acute' ? 0 : 1),
        );
        const { safeMinimum, bedStep, spaces } = input.areas[result.areas.indexOf(area)];
        expect(shift.bedsToStaff).toBeGreaterThanOrEqual(Math.max(safeMinimum, shift.bedsForPlanningRisk));
        expect((shift.bedsToStaff - safeMinimum) % bedStep).toBe(0);
        expect(shift.bedsThatDoNotExist).toBe(Math.max(0, shift.bedsToStaff - spaces));
      }
    }
  });

  it('the beds it says to add bring each hour to the limit, and one step fewer would not', () => {
    const short = withArea(0, { staffedBeds: [{ at: input.issuedAt - 3600, beds: 14 }] });
    const tight = issueOutlook(model, short).areas[0];
    expect(tight.firstHourPastLimit).toBe(0);
    const most = Math.max(...tight.bedsToAdd);
    expect(most).toBeGreaterThan(0);
    const h = tight.bedsToAdd.indexOf(most);
    const chanceWith = (beds: number): number =>
      issueOutlook(model, withArea(0, { staffedBeds: [{ at: input.issuedAt - 3600, beds: 14 + beds }] })).areas[0]
        .shortfall[h].chance;
    expect(chanceWith(most)).toBeLessThanOrEqual(0.25);
    expect(chanceWith(most - 2)).toBeGreaterThan(0.25);
    expect(tight.bedsThatDoNotExist[h]).toBe(Math.max(0, 14 + most - 26));
    expect(tight.smallestChange?.beds).toBeGreaterThanOrEqual(tight.bedsToAdd[0]);
  });

  it('the boarding patients it says to move out bring the rest of the shift to the limit; the simulation of it agrees', () => {
    const tight = withArea(0, { staffedBeds: [{ at: input.issuedAt - 3600, beds: 24 }] });
    const asked = issueOutlook(model, tight).areas[0];
    expect(asked.boardingOut).not.toBeNull();
    const { patients, by } = asked.boardingOut ?? { patients: 0, by: 0 };
    const prepared = prepareNeed(model, tight);
    const byHours = (by - prepared.plan.startAt) / 3600;
    const first = asked.firstHourPastLimit ?? 0;
    const last = tight.hours.findIndex((at) => at >= tight.shifts[0].to) - 1;
    const worst = (out: number): number => {
      const part = simulateNeedPart(prepared.plan, 0, tight.replications, {
        boardersOut: [{ area: 0, patients: out, byHours }],
      });
      let most = 0;
      for (let h = first; h <= last; h += 1) {
        const short = part.need
          .subarray(h * part.size, (h + 1) * part.size)
          .reduce((sum, count, n) => (n > 24 ? sum + count : sum), 0);
        most = Math.max(most, short / tight.replications);
      }
      return most;
    };
    expect(worst(patients)).toBeLessThanOrEqual(0.25);
    expect(worst(patients - 1)).toBeGreaterThan(0.25);
  });

  it('answers on the edges without a NaN', () => {
    const edges: OutlookInput[] = [
      withArea(0, { staffedBeds: [{ at: input.issuedAt - 60, beds: 0 }], spaces: 0, safeMinimum: 0 }),
      withArea(0, { census: null }),
      withArea(0, { census: { takenAt: input.issuedAt, present: 90, waiting: 40, boarding: 50 } }),
      withArea(1, { census: { takenAt: input.issuedAt, present: 0, waiting: 0, boarding: 0 } }),
      buildOutlookInput({ shifts: [], undecided: null, arrivalsSince: null, hours: input.hours.slice(0, 1) }),
      buildOutlookInput({ shifts: [{ name: 'over', from: input.issuedAt - 7200, to: input.issuedAt - 3600 }] }),
      buildOutlookInput({ replications: 1 }),
    ];
    for (const edge of edges)
      expectNoNaN(issueOutlook(model, { ...edge, replications: Math.min(200, edge.replications) }));
    expect(issueOutlook(model, edges[1]).areas[0].counted).toBe(false);
    const none = issueOutlook(model, edges[0]).areas[0];
    expect(none.shortfall[3].chance).toBe(1);
    expect(none.bedsThatDoNotExist).toEqual(none.bedsToAdd);
  });

  it('refuses bad input by name', () => {
    const refused: [Partial<OutlookInput>, RegExp][] = [
      [{ issuedAt: NaN }, /issuedAt/],
      [{ hours: [] }, /hours/],
      [{ hours: [input.issuedAt - 3600] }, /hours\[0\]/],
      [{ replications: 0 }, /replications/],
      [{ seed: 0.5 }, /seed/],
      [{ planningRisk: 0 }, /planningRisk/],
      [{ areas: [] }, /areas/],
      [{ undecided: { takenAt: input.issuedAt, waiting: -1 } }, /undecided/],
      [{ shifts: [{ name: 'x', from: 2, to: 1 }] }, /shifts\[0\]/],
      [{ timeZone: 'Nowhere/At_All' }, /time zone/],
    ];
    for (const [more, message] of refused) expect(() => issueOutlook(model, buildOutlookInput(more))).toThrow(message);
    const census = { takenAt: input.issuedAt, present: 3, waiting: 2, boarding: 2 };
    expect(() => issueOutlook(model, withArea(0, { census }))).toThrow(/waiting and boarding/);
    expect(() => issueOutlook(model, withArea(0, { census: { ...census, present: NaN } }))).toThrow(/present/);
    expect(() => issueOutlook(model, withArea(0, { staffedBeds: [] }))).toThrow(/staffedBeds/);
    expect(() => issueOutlook(model, withArea(0, { staffedBeds: [{ at: 0, beds: -1 }] }))).toThrow(/beds/);
    expect(() => issueOutlook(model, withArea(0, { bedStep: 0 }))).toThrow(/bedStep/);
    expect(() => issueOutlook(model, withArea(0, { alertLimit: 1 }))).toThrow(/alertLimit/);
  });
});

describe('length of stay used', () => {
  it('is exponential where stays are, and their own shape where it moves the 90th percentile', () => {
    const { arrival, stay, calendar } = buildOutlookModel();
    const undated = { arrival, calendar, stay: { ...stay, toDecision: undefined } };
    expect(issueOutlook(undated, buildOutlookInput({ replications: 10 })).lengthOfStay).toBe('exponential');
    // Two exponential stages in turn.
    expect(result.lengthOfStay).toBe('exponential');
    expect(issueOutlook(buildOutlookModel(4), buildOutlookInput({ replications: 50 })).lengthOfStay).toBe('empirical');
  });
});

describe('previewNeed', () => {
  const exact = prepareExact(model, input);
  const preview = previewNeed(exact);

  it('lies near the simulation, which also draws what is unknown of parameters and factors by day', () => {
    preview.forEach((area, a) => {
      area.mean.forEach((mean, h) => {
        expectWithin(mean, result.areas[a].need.mean[h], 0.06 * mean + 0.25, `${area.areaId}, hour ${h}`);
        expectWithin(area.shortfall[h], result.areas[a].shortfall[h].chance, 0.09, `${area.areaId}, chance ${h}`);
      });
    });
  });

  it('answers changes in the direction they must move need', () => {
    const sum = (values: number[]): number => values.reduce((a, b) => a + b, 0);
    const base = sum(preview[0].mean);
    expect(sum(previewNeed(exact, { demand: [1.1, 1] })[0].mean)).toBeGreaterThan(base);
    expect(sum(previewNeed(exact, { stay: [2, 2, 2, 2, 2, 1, 1, 1, 1, 1] })[0].mean)).toBeGreaterThan(base);
    const surge = { area: 0, fromHours: 2, toHours: 4, ratePerHour: 5 };
    const extra = sum(previewNeed(exact, { surge: [surge] })[0].mean) - base;
    // Ten patients more, each there for a few of the 24 hours.
    expect(extra).toBeGreaterThan(10);
    expect(extra).toBeLessThan(100);
    const closed = previewNeed(exact, { closed: [{ area: 0, fromHours: 0, toHours: 48, to: 1 }] });
    expect(sum(closed[0].mean)).toBeLessThan(base);
    expect(sum(closed[1].mean)).toBeGreaterThan(sum(preview[1].mean));
    const out = previewNeed(exact, { boardersOut: [{ area: 0, patients: 3, byHours: 3 }] })[0];
    expect(out.mean[0]).toBeCloseTo(preview[0].mean[0], 9);
    // The simulation of the same change takes as many away, hour by hour.
    const { plan } = prepareNeed(model, input);
    const simulated = [{}, { boardersOut: [{ area: 0, patients: 3, byHours: 3 }] }].map((change) => {
      const part = simulateNeedPart(plan, 0, 1000, change);
      return input.hours.map((_, h) =>
        part.need
          .subarray(h * part.size, (h + 1) * part.size)
          .reduce((total, count, n) => total + (n * count) / 1000, 0),
      );
    });
    for (let h = 0; h < 12; h += 1) {
      const fewer = simulated[0][h] - simulated[1][h];
      expectWithin(preview[0].mean[h] - out.mean[h], fewer, 0.15, `fewer at hour ${h}`);
    }
  });
});

describe('compareNeed', () => {
  const { plan } = prepareNeed(model, input);
  const asIs = simulateNeedPart(plan, 0, 400);

  it('pairs by replication: no change differs by exactly 0', () => {
    const same = compareNeed([asIs], [simulateNeedPart(plan, 0, 200), simulateNeedPart(plan, 200, 400)]);
    expect(numbers(same).every(([, value]) => value === 0)).toBe(true);
  });

  it('knows a difference far better than two separate runs would', () => {
    const changed = simulateNeedPart(plan, 0, 400, { demand: [1.05, 1] });
    const { bedHoursShort } = compareNeed([asIs], [changed]);
    const values = Array.from(asIs.bedHoursShort.subarray(0, 400));
    const mean = values.reduce((a, b) => a + b, 0) / 400;
    const variance = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / 399;
    const separate = Math.sqrt((2 * variance) / 400);
    expect(bedHoursShort[0].difference).toBeGreaterThan(0);
    expect(bedHoursShort[0].se).toBeLessThan(separate / 2);
    expect(bedHoursShort[1].difference).toBe(0);
  });

  it('a surge and a closed area reach whom they must', () => {
    const surge = simulateNeedPart(plan, 0, 400, { surge: [{ area: 1, fromHours: 1, toHours: 3, ratePerHour: 6 }] });
    const worse = compareNeed([asIs], [surge]);
    expect(worse.bedHoursShort[1].difference).toBeGreaterThan(0);
    expect(worse.bedHoursShort[0].difference).toBe(0);
    const closed = simulateNeedPart(plan, 0, 400, { closed: [{ area: 1, fromHours: 0, toHours: 99, to: 0 }] });
    const moved = compareNeed([asIs], [closed]);
    expect(moved.bedHoursShort[0].difference).toBeGreaterThan(0);
    expect(moved.bedHoursShort[1].difference).toBeLessThan(0);
  });

  it('refuses changes and comparisons that make no sense, by name', () => {
    expect(() => simulateNeedPart(plan, 0, 1, { demand: [1] })).toThrow(/demand/);
    expect(() => simulateNeedPart(plan, 0, 1, { demand: [1, NaN] })).toThrow(/demand\[1\]/);
    expect(() => simulateNeedPart(plan, 0, 1, { stay: [1] })).toThrow(/stay/);
    expect(() =>
      simulateNeedPart(plan, 0, 1, { surge: [{ area: 2, fromHours: 0, toHours: 1, ratePerHour: 1 }] }),
    ).toThrow(/surge\[0\].area/);
    expect(() => simulateNeedPart(plan, 0, 1, { closed: [{ area: 1, fromHours: 0, toHours: 1, to: 1 }] })).toThrow(
      /closed/,
    );
    expect(() => simulateNeedPart(plan, 0, 1, { beds: [Int32Array.of(1), null] })).toThrow(/beds\[0\]/);
    expect(() => compareNeed([asIs], [simulateNeedPart(plan, 0, 300)])).toThrow(/same replications/);
  });
});
