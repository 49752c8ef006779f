import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PlanChange } from '../../../shared/domain/plan-change.ts';
import { comparePart, mergeCompared, compareNeed, pairedDifference } from '../../../shared/forecasting/compare-need.ts';
import {
  compareScenarioPart,
  prepareScenario,
  scenarioFromParts,
} from '../../../shared/forecasting/compare-scenario.ts';
import { prepareExact } from '../../../shared/forecasting/exact-outlook.ts';
import { makeExactWire } from '../../../shared/forecasting/exact-wire.ts';
import { binSeconds } from '../../../shared/forecasting/need-plan.ts';
import type { NeedPlan } from '../../../shared/forecasting/need-plan.ts';
import { previewNeed, type ExactOutlook } from '../../../shared/forecasting/preview-need.ts';
import { readExactWire } from '../../../shared/forecasting/read-exact-wire.ts';
import { needChangeOf } from '../../../shared/forecasting/scenario.ts';
import { simulateNeedPart } from '../../../shared/forecasting/simulate-need.ts';
import { boardingStream, streamsPerArea } from '../../../shared/forecasting/stay-model.ts';
import { buildNeedPlan, type KnownArea } from '../../support/build-need-plan.ts';
import { buildOutlookInput, buildOutlookModel } from '../../support/build-outlook-model.ts';
import { expectWithin } from '../../support/closeness.ts';

const hours = 24;
const hour = 3600;
const constant = (value: number) => new Array<number>(hours).fill(value);
const areas: KnownArea[] = [
  {
    rates: Array.from({ length: hours }, (_, h) => (h < 8 ? 2 : 4)),
    hazards: [0.4, 0.2, 0.3, 0.8, 0.12].map(constant),
    shares: [0.6, 0.25, 0.05, 0.1],
    present: 14,
    presentShares: [0.5, 0.4, 0.05, 0.05, 0],
    boarding: 4,
    beds: 15,
  },
  {
    rates: constant(0.8),
    hazards: [0.5, 0.25, 0.3, 0.9, 0.15].map(constant),
    shares: [0.4, 0.5, 0.05, 0.05],
    present: 3,
    presentShares: [0.4, 0.6, 0, 0, 0],
    beds: 4,
  },
];
const ids = ['a', 'b'];

/** The same areas as the exact method sees them: all parameters known, no factors. */
function exactOf(plan: NeedPlan): ExactOutlook {
  return {
    plan,
    endSegment: Int32Array.from({ length: hours }, (_, h) => h),
    areas: areas.map((area, a) => ({
      areaId: ids[a],
      flows: {
        startSegment: 0,
        ahead: {
          ratePerHour: Array.from({ length: streamsPerArea }, (_, s) =>
            Float64Array.from(area.rates, (rate) => (s === boardingStream ? 0 : rate * area.shares[s])),
          ),
          hazardPerHour: area.hazards.map((hazard) => Float64Array.from(hazard)),
        },
      },
      present: [{ patients: area.present - (area.boarding ?? 0), shares: area.presentShares }],
      startMeans: null,
      boarders: area.boarding ?? 0,
      boarderStream: boardingStream,
      staged: false,
      arrivalVariance: 0,
      outflowNodes: [{ value: 1, weight: 1 }],
    })),
  };
}

const plan = buildNeedPlan(areas, 7, [
  [0, 8],
  [8, 16],
  [16, 24],
]);
const frame = {
  startAt: 0,
  bins: (hours * hour) / binSeconds,
  areas: areas.map(({ beds }, a) => ({ areaId: ids[a], staffedBeds: [{ at: 0, beds }] })),
};
const bedsMore = (beds: number, from = 4, to = 14, areaId = 'a'): PlanChange => ({
  kind: 'beds',
  areaId,
  from: from * hour,
  to: to * hour,
  beds,
});
const plans: [string, PlanChange[]][] = [
  ['as is', []],
  ['more arrivals', [{ kind: 'demand', areaId: null, percent: 30 }]],
  ['fewer arrivals in one area', [{ kind: 'demand', areaId: 'a', percent: -40 }]],
  ['longer stays', [{ kind: 'stay', areaId: null, who: 'everyone', percent: 25 }]],
  ['shorter stays of admitted patients', [{ kind: 'stay', areaId: 'a', who: 'admitted', percent: -30 }]],
  ['a surge', [{ kind: 'surge', areaId: 'b', from: 6 * hour, to: 9 * hour, patients: 9 }]],
  ['an area closed', [{ kind: 'closed', areaId: 'b', from: 5 * hour, to: 15 * hour, toAreaId: 'a' }]],
  ['boarding patients out', [{ kind: 'boarding out', areaId: 'a', patients: 3, by: 4 * hour }]],
  ['beds and arrivals', [bedsMore(3), bedsMore(-1, 14, 20), { kind: 'demand', areaId: null, percent: 10 }]],
];

describe('a plan by the exact method and by simulation, the same measure', () => {
  const exact = exactOf(plan);
  const replications = 6000;

  // 2 areas × 24 hours × 9 plans = 432 comparisons, each within 4 standard errors; the chance that a right pair fails one is 3 %, and the seed is fixed.
  it.each(plans)('agree within the Monte Carlo error: %s', (_, changes) => {
    const change = needChangeOf(changes, frame);
    const preview = previewNeed(exact, change);
    const part = simulateNeedPart(plan, 0, replications, change);
    preview.forEach(({ shortfall, staffed }, a) => {
      shortfall.forEach((chance, h) => {
        const first = (a * hours + h) * part.size;
        const above = part.need.subarray(first + staffed[h] + 1, first + part.size).reduce((sum, n) => sum + n, 0);
        const allowed = 4 * Math.sqrt((chance * (1 - chance)) / replications) + 3 / replications;
        expectWithin(above / replications, chance, allowed, `area ${a}, hour ${h}`);
      });
    });
  });

  it('more beds lower the exact chance at every hour that they are there, and change no other', () => {
    const before = previewNeed(exact);
    const after = previewNeed(exact, needChangeOf([bedsMore(2)], frame));
    after[0].shortfall.forEach((chance, h) => {
      // Beds in force at a full hour: those of the window that it lies in.
      const within = h + 1 >= 4 && h + 1 < 14;
      if (within) expect(chance).toBeLessThan(before[0].shortfall[h]);
      else expect(chance).toBe(before[0].shortfall[h]);
    });
    expect(after[1]).toEqual(before[1]);
    const mean = before[0].laws[3].reduce((sum, p, n) => sum + Math.max(0, n - 15) * p, 0);
    expectWithin(before[0].bedsShort[3], mean, 1e-12, 'beds short on average');
  });
});

describe('compared pairs', () => {
  const window = fc
    .tuple(fc.integer({ min: 0, max: 46 }), fc.integer({ min: 1, max: 30 }), fc.integer({ min: 0, max: 5 }), fc.nat(1))
    .map(([from, length, beds, a]) => bedsMore(beds, from / 2, Math.min(24, (from + length) / 2), ids[a]));
  const asIs = simulateNeedPart(plan, 0, 120);
  const flat = areas.map(({ beds }) => constant(beds));

  it('more beds never raise a shortfall chance, in any shift, hour or area, whatever the windows', () => {
    fc.assert(
      fc.property(fc.array(window, { minLength: 1, maxLength: 4 }), (changes) => {
        const change = needChangeOf(changes, frame);
        const with_ = areas.map((area, a) =>
          Array.from(plan.hourTo, (bin) => change.beds?.[a]?.[bin - 1] ?? area.beds),
        );
        const part = comparePart(asIs, simulateNeedPart(plan, 0, 120, change), { asIs: flat, changed: with_ });
        part.shiftShort.changed.forEach((short, cell) => expect(short).toBeLessThanOrEqual(part.shiftShort.asIs[cell]));
        part.bedHoursShort.changed.forEach((short, row) =>
          expect(short).toBeLessThanOrEqual(part.bedHoursShort.asIs[row]),
        );
        part.hourChanged.forEach((short, h) => expect(short).toBeLessThanOrEqual(part.hourAsIs[h]));
      }),
      { numRuns: 40 },
    );
  });

  it('fewer beds and more arrivals never lower one', () => {
    const change = needChangeOf([bedsMore(-2, 0, 24), { kind: 'demand', areaId: null, percent: 20 }], frame);
    const { shiftShort, bedHoursShort } = compareNeed([asIs], [simulateNeedPart(plan, 0, 120, change)]);
    for (const row of [...shiftShort, bedHoursShort]) {
      for (const { difference } of row) expect(difference).toBeGreaterThanOrEqual(0);
    }
  });

  it('parts of any cut add up to the whole', () => {
    const change = needChangeOf([bedsMore(2), { kind: 'demand', areaId: 'b', percent: 50 }], frame);
    const run = (from: number, to: number) =>
      comparePart(simulateNeedPart(plan, from, to), simulateNeedPart(plan, from, to, change), {
        asIs: flat,
        changed: flat,
      });
    const whole = run(0, 120);
    const merged = mergeCompared([run(70, 120), run(0, 30), run(30, 70)]);
    expect(merged.hourChanged).toEqual(whole.hourChanged);
    expect(merged.shiftShort).toEqual(whole.shiftShort);
    const by = compareNeed([asIs], [simulateNeedPart(plan, 0, 120, change)]);
    by.bedHoursShort.forEach(({ difference, se }, row) => {
      const found = pairedDifference(merged.bedHoursShort, row, 120);
      expectWithin(found.difference, difference, 1e-9, `row ${row}`);
      expectWithin(found.se, se, 1e-9, `standard error of row ${row}`);
    });
    expect(() => mergeCompared([run(0, 30), run(40, 50)])).toThrow(/missing or double/);
    expect(() => comparePart(asIs, simulateNeedPart(plan, 0, 60), { asIs: flat, changed: flat })).toThrow(
      /same replications/,
    );
  });
});

describe('a plan on fitted models', () => {
  const model = buildOutlookModel();
  const input = buildOutlookInput({ replications: 600, waitLimitMinutes: 60 });
  const first = input.hours[0];
  const changes: PlanChange[] = [
    { kind: 'beds', areaId: 'acute', from: first, to: first + 9 * hour, beds: 2 },
    { kind: 'demand', areaId: 'resuscitation', percent: 20 },
  ];
  const prepared = prepareScenario(model, input, changes);
  const result = scenarioFromParts(input, prepared, [compareScenarioPart(prepared, 0, 600)]);

  it('gives the same digits again, from parts and from what went through JSON', () => {
    const stored = JSON.parse(JSON.stringify({ model, input, changes })) as {
      model: typeof model;
      input: typeof input;
      changes: PlanChange[];
    };
    const again = prepareScenario(stored.model, stored.input, stored.changes);
    const parts = [
      [400, 600],
      [0, 400],
    ].map(([from, to]) => compareScenarioPart(again, from, to));
    expect(scenarioFromParts(stored.input, again, parts)).toEqual(result);
    const other = { ...input, seed: input.seed + 1 };
    const reseeded = prepareScenario(model, other, changes);
    expect(scenarioFromParts(other, reseeded, [compareScenarioPart(reseeded, 0, 600)])).not.toEqual(result);
    expect(() => scenarioFromParts(input, prepared, parts.slice(1))).toThrow(/parts hold/);
  });

  it('has intervals about every difference, and one of 3 / n where no pair differed', () => {
    expect(result.rows.map(({ areaId }) => areaId)).toEqual(['acute', 'resuscitation', null]);
    const [acute, resuscitation] = result.rows;
    expect(acute.bedHoursShort.high).toBeLessThan(0);
    expect(resuscitation.bedHoursShort.low).toBeGreaterThan(0);
    for (const { asIs, plan: with_, difference, low, high } of result.rows.flatMap(({ shifts }) => shifts)) {
      expect(difference).toBeCloseTo(with_ - asIs, 12);
      expect(low < difference && difference < high).toBe(true);
    }
    const none = prepareScenario(model, input, [{ kind: 'demand', areaId: null, percent: 0 }]);
    const same = scenarioFromParts(input, none, [compareScenarioPart(none, 0, 600)]);
    // Rule of three: Hanley & Lippman-Hand (1983), JAMA 249, 1743.
    expect(same.rows[0].shifts[0]).toMatchObject({ difference: 0, low: -0.005, high: 0.005 });
  });

  it('compares who waits past the limit, on the same random numbers: fewer with beds, more with arrivals, none where nothing changes', () => {
    const [acute, resuscitation, department] = result.rows;
    expect(result.waitLimitMinutes).toBe(60);
    expect(acute.waits?.[0].high).toBeLessThan(0);
    expect(resuscitation.waits?.[1].low).toBeGreaterThan(0);
    department.waits?.forEach(({ difference }, s) => {
      const sum = (acute.waits?.[s].difference ?? NaN) + (resuscitation.waits?.[s].difference ?? NaN);
      expectWithin(difference, sum, 1e-9, `shift ${s}`);
    });
    const waitsOf = (tried: PlanChange[], over: typeof model = model, about = input) => {
      const one = prepareScenario(over, about, tried);
      return scenarioFromParts({ ...about, replications: 60 }, one, [compareScenarioPart(one, 0, 60)]).rows.map(
        ({ waits }) => waits,
      );
    };
    for (const rows of waitsOf([{ kind: 'demand', areaId: null, percent: 0 }])) {
      for (const { difference } of rows ?? []) expect(difference).toBe(0);
    }
    // A closed area sends nobody to wait there, and more to the other.
    const span = { from: input.issuedAt, to: input.hours[23] };
    const closed = waitsOf([{ kind: 'closed', areaId: 'resuscitation', ...span, toAreaId: 'acute' }]);
    const surge = waitsOf([{ kind: 'surge', areaId: 'acute', ...span, patients: 20 }]);
    const longer = waitsOf([{ kind: 'stay', areaId: 'acute', who: 'admitted', percent: 50 }]);
    expect(closed[1]?.[1].plan).toBe(0);
    for (const rows of [closed, surge, longer]) expect(rows[0]?.[1].difference).toBeGreaterThan(0);
    const without = { ...model, stay: { ...model.stay, bedSpace: [model.stay.bedSpace[0], null] } };
    expect(waitsOf(changes, without).map((rows) => rows === null)).toEqual([false, true, true]);
    expect(waitsOf(changes, model, { ...input, waitLimitMinutes: null })).toEqual([null, null, null]);
  });

  it('is answered in the browser as on the server, to the digits that are sent', () => {
    const wire = makeExactWire(model, input);
    const text = JSON.stringify(wire);
    expect(text.length).toBeLessThan(60_000);
    const sent = readExactWire(JSON.parse(text) as typeof wire);
    const change = needChangeOf(changes, wire);
    const here = previewNeed(prepareExact(model, input), change);
    previewNeed(sent, change).forEach((area, a) => {
      expect(area.staffed).toEqual(here[a].staffed);
      area.shortfall.forEach((chance, h) => expectWithin(chance, here[a].shortfall[h], 1e-5, `${a}, ${h}`));
    });
  });

  it('names an area that it does not know', () => {
    expect(() => needChangeOf([{ kind: 'demand', areaId: 'nowhere', percent: 5 }], frame)).toThrow(/nowhere/);
  });
});
