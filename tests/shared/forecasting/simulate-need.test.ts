import { describe, expect, it } from 'vitest';
import { exactNeed } from '../../../shared/forecasting/exact-need.ts';
import { highestExcess, mergeNeedParts } from '../../../shared/forecasting/need-part.ts';
import type { NeedPart } from '../../../shared/forecasting/need-part.ts';
import { simulateNeedPart } from '../../../shared/forecasting/simulate-need.ts';
import reference from '../../reference/patients-over-time.json' with { type: 'json' };
import { buildNeedPlan } from '../../support/build-need-plan.ts';
import type { KnownArea } from '../../support/build-need-plan.ts';

const { piecewise } = reference;
const hours = piecewise.rates.length;

function steady(hazard: number): number[] {
  return new Array<number>(hours).fill(hazard);
}

/** Night-slowed hazards, so that the time change is at work. */
function slowedAtNight(hazard: number): number[] {
  return Array.from({ length: hours }, (_, h) => (h < 7 ? 0.5 * hazard : 1.2 * hazard));
}

const mixed: KnownArea = {
  rates: piecewise.rates,
  shares: [0.6, 0.28, 0.05, 0.07],
  hazards: [0.3, 0.12, 0.2, 0.5, 0.08].map(slowedAtNight),
  present: 18,
  presentShares: [0.5, 0.4, 0.05, 0.05, 0],
  boarding: 4,
  beds: 20,
};

function distribution(part: NeedPart, area: number, hour: number): Float64Array {
  const replications = part.toReplication - part.fromReplication;
  const from = (area * part.hours + hour) * part.size;
  return Float64Array.from(part.need.subarray(from, from + part.size), (count) => count / replications);
}

/** Largest |F̂ − F| in units of √(F(1 − F)/R) over all n and hours, and the number of comparisons where F is not 0 or 1. */
function compare(part: NeedPart, area: number, exact: readonly ArrayLike<number>[]) {
  const replications = part.toReplication - part.fromReplication;
  let worst = 0;
  let comparisons = 0;
  for (let h = 0; h < exact.length; h += 1) {
    const seen = distribution(part, area, h);
    let simulated = 0;
    let known = 0;
    for (let n = 0; n < seen.length; n += 1) {
      simulated += seen[n];
      known += exact[h][n] ?? 0;
      // Below a chance of a few replications the normal scale of 4 no longer bounds a count.
      if (known * replications < 10 || (1 - known) * replications < 10) continue;
      comparisons += 1;
      worst = Math.max(worst, Math.abs(simulated - known) / Math.sqrt((known * (1 - known)) / replications));
    }
  }
  return { worst, comparisons };
}

describe('simulateNeedPart', () => {
  // Source: binomial survivors and Poisson newcomers in SciPy and R (patients-over-time.json), here at 5 of 24 hours.
  it('has the distribution of need that SciPy gives, |F̂ − F| ≤ 4·√(F(1 − F)/R)', () => {
    const plan = buildNeedPlan(
      [
        {
          rates: piecewise.rates,
          shares: [1, 0, 0, 0],
          hazards: Array.from({ length: 5 }, () => steady(piecewise.mu)),
          present: piecewise.n0,
          presentShares: [1, 0, 0, 0, 0],
          beds: 20,
        },
      ],
      11,
    );
    const part = simulateNeedPart(plan, 0, 40_000);
    let comparisons = 0;
    for (const [hour, pmf] of Object.entries(piecewise.pmf)) {
      const only = { ...part, hours: 1, need: part.need.subarray((Number(hour) - 1) * part.size) };
      const found = compare(only, 0, [pmf]);
      expect(found.worst, `hour ${hour}`).toBeLessThanOrEqual(4);
      comparisons += found.comparisons;
    }
    expect(comparisons).toBe(101);
  });

  it('agrees with the exact method with streams, boarders and hazards that change by the hour', () => {
    const part = simulateNeedPart(buildNeedPlan([mixed], 12), 0, 40_000);
    const exact = exactNeed({
      hours: steady(1),
      streams: mixed.hazards.map((hazardPerHour, s) => ({
        ratePerHour: mixed.rates.map((rate) => rate * (mixed.shares[s] ?? 0)),
        hazardPerHour,
      })),
      present: [
        { patients: 4, shares: [0, 0, 0, 0, 1] },
        { patients: 14, shares: mixed.presentShares },
      ],
    });
    const { worst, comparisons } = compare(part, 0, exact);
    // 614 comparisons, strongly dependent; for one alone 4 is exceeded 6 times in 100,000.
    expect(comparisons).toBe(614);
    expect(worst).toBeLessThanOrEqual(4);
  });

  it('comes nearer as 1/√R: root mean square errors at 250, 1,000 and 4,000 replications', () => {
    const plan = buildNeedPlan([mixed], 13);
    const truth = exactNeed({
      hours: steady(1),
      streams: mixed.hazards.map((hazardPerHour, s) => ({
        ratePerHour: mixed.rates.map((rate) => rate * (mixed.shares[s] ?? 0)),
        hazardPerHour,
      })),
      present: [
        { patients: 4, shares: [0, 0, 0, 0, 1] },
        { patients: 14, shares: mixed.presentShares },
      ],
    });
    const scaled = [250, 1000, 4000].map((replications) => {
      const runs = Math.max(8, 8000 / replications);
      let square = 0;
      let count = 0;
      for (let run = 0; run < runs; run += 1) {
        const from = 1_000_000 + run * replications;
        const part = simulateNeedPart(plan, from, from + replications);
        for (let h = 0; h < hours; h += 1) {
          const seen = distribution(part, 0, h);
          let difference = 0;
          for (let n = 0; n < 40; n += 1) {
            difference += seen[n] - (truth[h][n] ?? 0);
            square += difference * difference;
            count += 1;
          }
        }
      }
      return Math.sqrt(square / count) * Math.sqrt(replications);
    });
    // Constant if the error falls as 1/√R; each is itself uncertain by about a sixth.
    for (const value of scaled) expect(value / scaled[0]).toBeGreaterThan(0.6);
    for (const value of scaled) expect(value / scaled[0]).toBeLessThan(1.6);
  });

  it('gives the same digits in one part or in many, in any order', () => {
    const plan = buildNeedPlan([mixed, { ...mixed, present: 9, boarding: 1, beds: 10 }], 14, [[2, 9]]);
    const whole = simulateNeedPart(plan, 0, 300);
    const parts = [
      [120, 121],
      [0, 120],
      [121, 300],
    ].map(([from, to]) => simulateNeedPart(plan, from, to));
    expect(mergeNeedParts(parts)).toEqual(whole);
    expect(mergeNeedParts([structuredClone(whole)])).toEqual(whole);
  });

  it('refuses parts that overlap, leave a hole or belong to other plans', () => {
    const plan = buildNeedPlan([mixed], 15);
    const [a, b, c] = [
      [0, 2],
      [1, 3],
      [3, 4],
    ].map(([from, to]) => simulateNeedPart(plan, from, to));
    expect(() => mergeNeedParts([])).toThrow(RangeError);
    expect(() => mergeNeedParts([a, b])).toThrow(/missing or double/);
    expect(() => mergeNeedParts([a, c])).toThrow(/missing or double/);
    const other = simulateNeedPart(buildNeedPlan([mixed, mixed], 15), 2, 4);
    expect(() => mergeNeedParts([a, other])).toThrow(/different plans/);
    expect(() => simulateNeedPart(plan, 3, 3)).toThrow(/replications/);
    expect(() => simulateNeedPart(plan, 0.5, 3)).toThrow(/replications/);
  });

  it('counts within an hour at least what the full hour shows, and the shift at least each of its hours', () => {
    const plan = buildNeedPlan([mixed], 16, [[0, 8]]);
    const part = simulateNeedPart(plan, 0, 2000);
    for (let h = 0; h < hours; h += 1) {
      const atHour = part.need
        .subarray(h * part.size, (h + 1) * part.size)
        .reduce((sum, count, n) => (n > mixed.beds ? sum + count : sum), 0);
      const within = part.within
        .subarray(h * (highestExcess + 1), (h + 1) * (highestExcess + 1))
        .reduce((sum, count, excess) => (excess > 0 ? sum + count : sum), 0);
      expect(within).toBeGreaterThanOrEqual(atHour);
      if (h < 8) expect(part.shiftShort[0]).toBeGreaterThanOrEqual(within);
    }
    expect(part.shiftShort[0]).toBeGreaterThan(0);
  });
});

describe('changes on common random numbers', () => {
  const plan = buildNeedPlan([mixed, { ...mixed, beds: 16 }], 17);
  const total = (part: NeedPart, area: number): number => {
    let sum = 0;
    for (let h = 0; h < part.hours; h += 1)
      distribution(part, area, h).forEach((chance, n) => {
        sum += chance * n;
      });
    return sum;
  };
  const asIs = simulateNeedPart(plan, 0, 400);

  it('no change gives the same digits', () => {
    const same = simulateNeedPart(plan, 0, 400, {
      demand: [1, 1],
      stay: new Array<number>(10).fill(1),
      boardersOut: [],
    });
    expect(same).toEqual(asIs);
  });

  it('a change in one area leaves the other to the digit', () => {
    for (const change of [{ demand: [1.3, 1] }, { demand: [0.7, 1] }, { stay: [2, 2, 2, 2, 2, 1, 1, 1, 1, 1] }]) {
      const changed = simulateNeedPart(plan, 0, 400, change);
      const row = asIs.hours * asIs.size;
      expect(changed.need.subarray(row)).toEqual(asIs.need.subarray(row));
      expect(changed.need.subarray(0, row)).not.toEqual(asIs.need.subarray(0, row));
    }
  });

  it('moves need the way it must: demand, stay, boarders', () => {
    const means = [{ demand: [0.8, 1] }, {}, { demand: [1.2, 1] }].map((change) =>
      total(simulateNeedPart(plan, 0, 400, change), 0),
    );
    expect(means[0]).toBeLessThan(means[1]);
    expect(means[1]).toBeLessThan(means[2]);
    const longer = simulateNeedPart(plan, 0, 400, { stay: [1.2, 1.2, 1.2, 1.2, 1.2, 1, 1, 1, 1, 1] });
    expect(total(longer, 0)).toBeGreaterThan(means[1]);
    const out = simulateNeedPart(plan, 0, 400, { boardersOut: [{ area: 0, patients: 4, byHours: 2 }] });
    // Before the hour nothing changes; at it and after there is less.
    expect(distribution(out, 0, 0)).toEqual(distribution(asIs, 0, 0));
    const gone = distribution(out, 0, 1).reduce((sum, chance, n) => sum + chance * n, 0);
    const kept = distribution(asIs, 0, 1).reduce((sum, chance, n) => sum + chance * n, 0);
    // Four boarders leave at 0.04 an hour (halved at night): e^(−0.08) of them were still there.
    expect(kept - gone).toBeGreaterThan(4 * Math.exp(-0.08) - 0.2);
    expect(kept - gone).toBeLessThan(4 * Math.exp(-0.08) + 0.2);
  });
});
