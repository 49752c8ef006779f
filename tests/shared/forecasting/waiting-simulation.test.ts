import { describe, expect, it } from 'vitest';
import { finiteBeds } from '../../../shared/forecasting/finite-beds.ts';
import { staffForDelay } from '../../../shared/forecasting/staff-for-delay.ts';
import {
  prepareWaiting,
  prepareWaitingGround,
  segmentsWithin,
  shiftWaits,
} from '../../../shared/forecasting/waiting-outlook.ts';
import { simulateWaitingPart } from '../../../shared/forecasting/waiting-simulation.ts';
import type { WaitingPlan } from '../../../shared/forecasting/waiting-simulation.ts';
import { mmcMeasures, serversForDelay } from '../../../shared/stochastic/erlang.ts';
import reference from '../../reference/patients-over-time.json' with { type: 'json' };
import queues from '../../reference/queue-formulas.json' with { type: 'json' };
import { buildOutlookInput, buildOutlookModel } from '../../support/build-outlook-model.ts';
import { expectRelative } from '../../support/closeness.ts';

function plan(more: Partial<WaitingPlan> & Pick<WaitingPlan, 'ratePerHour'>): WaitingPlan {
  const hours = more.ratePerHour.length;
  return {
    seed: 3,
    segmentAt: Float64Array.from({ length: hours + 1 }, (_, k) => k),
    beds: new Int32Array(hours).fill(20),
    steps: Float64Array.of(1),
    hazardPerHour: [new Float64Array(hours).fill(0.25)],
    impatiencePerHour: 0,
    inBedSpaces: [12],
    waiting: 0,
    waitLimitHours: 1,
    redraw: null,
    highest: 200,
    ...more,
  };
}

/** Largest |F̂ − F| in units of √(F(1 − F)/R) over n and the hours given, with the number of comparisons. */
function compare(one: WaitingPlan, replications: number, exact: readonly Float64Array[], upTo: number) {
  const part = simulateWaitingPart(one, 0, replications);
  let worst = 0;
  let comparisons = 0;
  for (let h = 0; h < upTo; h += 1) {
    let simulated = 0;
    let known = 0;
    for (let n = 0; n < part.size; n += 1) {
      simulated += part.present[h * part.size + n] / replications;
      known += exact[h][n] ?? 0;
      if (known * replications < 10 || (1 - known) * replications < 10) continue;
      comparisons += 1;
      worst = Math.max(worst, Math.abs(simulated - known) / Math.sqrt((known * (1 - known)) / replications));
    }
  }
  return { worst, comparisons };
}

describe('simulateWaitingPart', () => {
  // Source: the Kolmogorov forward equations, themselves held against SciPy's matrix exponential in finite-beds.test.ts.
  it('agrees with the exact finite-bed law over a day, |F̂ − F| ≤ 4·√(F(1 − F)/R)', () => {
    const { rates, mu, n0, c_by_hour } = reference.finiteBeds.c20;
    const ratePerHour = Float64Array.from(rates);
    const exact = finiteBeds({
      hours: rates.map(() => 1),
      ratePerHour,
      hazardPerHour: rates.map(() => mu),
      beds: c_by_hour,
      start: n0,
    });
    const { worst, comparisons } = compare(plan({ ratePerHour }), 20_000, exact, 24);
    expect(comparisons).toBe(658);
    expect(worst).toBeLessThanOrEqual(4);
  });

  it('agrees with it when beds open, from 14 to 20 (hours 1 to 20; when beds close the laws differ by design)', () => {
    const { rates, mu, n0, c_by_hour } = reference.finiteBeds.c14_20_14;
    const ratePerHour = Float64Array.from(rates);
    const exact = finiteBeds({
      hours: rates.map(() => 1),
      ratePerHour,
      hazardPerHour: rates.map(() => mu),
      beds: c_by_hour,
      start: n0,
    });
    const one = plan({ ratePerHour, beds: Int32Array.from(c_by_hour), seed: 4 });
    const { worst, comparisons } = compare(one, 20_000, exact, 20);
    expect(comparisons).toBe(497);
    expect(worst).toBeLessThanOrEqual(4);
  });

  // Source: M/M/c waits (Erlang 1917), values in mpmath and R in queue-formulas.json.
  it('has the mean wait and the chance of waiting of M/M/c after a long time at constant rates', () => {
    const one = queues.mmc.find((row) => row.lambda === 4 && row.c === 20);
    if (one === undefined) throw new Error('the reference lacks its queue of 20 servers');
    const hours = 400;
    const part = simulateWaitingPart(
      plan({ ratePerHour: new Float64Array(hours).fill(one.lambda), waitLimitHours: 0, inBedSpaces: [16] }),
      0,
      1000,
    );
    let arrivals = 0;
    let seconds = 0;
    let waited = 0;
    for (let k = 100; k < hours - 24; k += 1) {
      arrivals += part.arrivals[k];
      seconds += part.secondsWaited[k];
      waited += part.overLimit[k];
    }
    // 1.1 million arrivals, in long dependence: errors near 1 %.
    expectRelative(waited / arrivals, one.P_wait, 0.03, 'chance of waiting');
    expectRelative(seconds / arrivals / 3600, one.Wq, 0.05, 'mean wait');
  });

  // Source: in M/M/c, first in, first out, P(wait > t) = P(wait > 0)·e^{−(cμ − λ)t} (Erlang 1917; the first factor from queue-formulas.json).
  it('has the share of waits over a limit of M/M/c after a long time', () => {
    const one = queues.mmc.find((row) => row.lambda === 4 && row.c === 20);
    if (one === undefined) throw new Error('the reference lacks its queue of 20 servers');
    const long = plan({ ratePerHour: new Float64Array(400).fill(one.lambda), waitLimitHours: 0.5, inBedSpaces: [16] });
    const part = simulateWaitingPart(long, 0, 1000);
    const { overLimit } = shiftWaits([part], segmentsWithin(long, 100, 376));
    expectRelative(overLimit ?? NaN, one.P_wait * Math.exp(-(20 * 0.25 - one.lambda) * 0.5), 0.05, 'share over');
  });

  it('the first to come is the first served, and a closing bed closes when its patient leaves', () => {
    // One bed, occupied until about 1 / 100 h; three wait, nobody comes: they are served one after the other.
    const served = simulateWaitingPart(
      plan({
        ratePerHour: new Float64Array(4),
        beds: Int32Array.of(1, 1, 1, 1),
        hazardPerHour: [new Float64Array(4).fill(1)],
        inBedSpaces: [1],
        waiting: 3,
      }),
      0,
      4000,
    );
    // Departures are a Poisson process of rate 1 until all four are gone: P(at most k left by t = 1).
    const stillThere = Array.from({ length: 5 }, (_, n) => served.present[n] / 4000);
    [4, 3, 2, 1].forEach((present, gone) => {
      const factorial = [1, 1, 2, 6][gone];
      expect(Math.abs(stillThere[present] - Math.exp(-1) / factorial)).toBeLessThan(0.03);
    });
    // Beds fall from 2 to 1 with both occupied: nobody is served until both have left.
    const closing = simulateWaitingPart(
      plan({
        ratePerHour: new Float64Array(3),
        beds: Int32Array.of(2, 1, 1),
        hazardPerHour: [Float64Array.of(0, 1, 1)],
        inBedSpaces: [2],
        waiting: 1,
      }),
      0,
      4000,
    );
    const waitingAtTwo = closing.waiting[closing.size + 1] / 4000;
    // The waiting patient starts when the second of two leaves: P(second still there after an hour) = 1 − (1 − e⁻¹)².
    expect(Math.abs(waitingAtTwo - (1 - (1 - Math.exp(-1)) ** 2))).toBeLessThan(0.03);
  });

  // Source: with patience and no bed, those waiting are M_t/M/∞ at the hazard of leaving (Eick, Massey & Whitt 1993).
  it('those who lose patience leave at their hazard and never take a bed', () => {
    const part = simulateWaitingPart(
      plan({
        ratePerHour: new Float64Array(10).fill(3),
        beds: new Int32Array(10),
        inBedSpaces: [0],
        impatiencePerHour: 0.5,
      }),
      0,
      4000,
    );
    const last = 9 * part.size;
    const mean = part.waiting.subarray(last).reduce((sum, count, n) => sum + (n * count) / 4000, 0);
    expectRelative(mean, (3 / 0.5) * (1 - Math.exp(-5)), 0.02, 'mean waiting');
    expect(part.present).toEqual(part.waiting);
  });

  it('gives the same digits split or whole, and no NaN at the edges', () => {
    const one = plan({ ratePerHour: Float64Array.of(3, 0, 5, 2), impatiencePerHour: 0.2, waiting: 4 });
    const whole = simulateWaitingPart(one, 0, 90);
    const split = [simulateWaitingPart(one, 0, 31), simulateWaitingPart(one, 31, 90)];
    for (const segments of [[0], [1], [0, 1, 2, 3]]) {
      expect(shiftWaits(split, segments)).toEqual(shiftWaits([whole], segments));
    }
    expect(shiftWaits([whole], [1])).toEqual({ arrivals: 0, meanMinutes: null, overLimit: null });
    expect(segmentsWithin(one, 1, 3)).toEqual([1, 2]);
    const empty = simulateWaitingPart(plan({ ratePerHour: new Float64Array(2), inBedSpaces: [0] }), 0, 3);
    expect(empty.present[0]).toBe(3);
  });

  it('refuses bad input by name', () => {
    const good = plan({ ratePerHour: Float64Array.of(1) });
    const refused: [Partial<WaitingPlan>, RegExp][] = [
      [{ ratePerHour: Float64Array.of(NaN) }, /ratePerHour\[0\]/],
      [{ beds: Int32Array.of(-1) }, /beds\[0\]/],
      [{ hazardPerHour: [Float64Array.of(-1)] }, /hazardPerHour/],
      [{ impatiencePerHour: NaN }, /impatience/],
      [{ waiting: 0.5 }, /waiting/],
      [{ inBedSpaces: [-1] }, /inBedSpaces/],
      [{ waitLimitHours: NaN }, /waitLimit/],
    ];
    for (const [more, message] of refused) {
      expect(() => simulateWaitingPart({ ...good, ...more }, 0, 1)).toThrow(message);
    }
    expect(() => shiftWaits([], [])).toThrow(/parts/);
  });
});

describe('prepareWaiting', () => {
  it('takes beds, patients and hazards from fitted bed-space times; without them there is no waiting to tell', () => {
    const model = buildOutlookModel();
    const input = buildOutlookInput();
    const one = prepareWaiting(prepareWaitingGround(model, input), 0, 1);
    if (one === null) throw new Error('the model has bed-space times');
    const { census } = input.areas[0];
    expect(one.inBedSpaces.reduce((a, b) => a + b, 0) + one.waiting).toBe(census?.present);
    // Stays in bed spaces were made 0.8 of whole stays: hazards 1 / 0.8 of theirs.
    const { departures, hoursInBedSpace } = model.stay.bedSpace[0] ?? { departures: [NaN], hoursInBedSpace: [1] };
    expectRelative(
      departures[0] / hoursInBedSpace[0],
      (model.stay.streams[0].departuresPerHour ?? NaN) / 0.8,
      0.02,
      'hazard',
    );
    const waits = shiftWaits([simulateWaitingPart(one, 0, 200)], segmentsWithin(one, 0, 12));
    expect(waits.overLimit).toBeGreaterThan(0);
    expect(waits.overLimit).toBeLessThan(1);
    expect(Number.isFinite(waits.meanMinutes)).toBe(true);
    const without = { ...model, stay: { ...model.stay, bedSpace: [null, null] } };
    expect(prepareWaiting(prepareWaitingGround(without, input), 0, 1)).toBeNull();
  });

  it('takes beds at their own half hours and counts what a plan changes', () => {
    const model = buildOutlookModel();
    const plain = buildOutlookInput();
    const half = plain.hours[3] + 1800;
    const areas = plain.areas.map((area, a) =>
      a === 0 ? { ...area, staffedBeds: [area.staffedBeds[0], { at: half, beds: 17 }] } : area,
    );
    const ground = prepareWaitingGround(model, { ...plain, areas });
    const changed = prepareWaiting(ground, 0, 1, {
      rate: (rates, k) => 2 * rates[0][k] + rates[1][k],
      stay: [2, 2, 2],
    });
    const asIs = prepareWaiting(ground, 0, 1);
    const other = prepareWaiting(ground, 1, 1);
    if (!changed || !asIs || !other) throw new Error('the model has bed-space times');
    const k = asIs.segmentAt.indexOf((half - plain.issuedAt) / 3600);
    expect([asIs.beds[k - 1], asIs.beds[k]]).toEqual([24, 17]);
    expect(changed.ratePerHour[k]).toBeCloseTo(2 * asIs.ratePerHour[k] + other.ratePerHour[k], 9);
    expect(changed.hazardPerHour[1][k]).toBeCloseTo(asIs.hazardPerHour[1][k] / 2, 9);
    changed.redraw?.(3);
    asIs.redraw?.(3);
    other.redraw?.(3);
    expect(changed.ratePerHour[k]).toBeCloseTo(2 * asIs.ratePerHour[k] + other.ratePerHour[k], 9);
  });
});

describe('staffForDelay', () => {
  // Source: Erlang C (60 targets of queue-formulas.json are checked in erlang.test.ts); Feldman et al. (2008) for the method.
  it('at constant rates ends at the least servers with Erlang C at most the target', () => {
    for (const target of [0.05, 0.1, 0.2, 0.5]) {
      for (const offered of [4, 12, 20]) {
        const servers = serversForDelay(offered, target);
        const hours = new Float64Array(6).fill(200);
        const { beds, delay } = staffForDelay(
          {
            hours,
            ratePerHour: hours.map(() => offered * 0.25),
            hazardPerHour: hours.map(() => 0.25),
            start: offered,
            most: 120,
          },
          target,
        );
        expect(beds[5], `offered ${offered}, target ${target}`).toBe(servers);
        expectRelative(delay[5], mmcMeasures(offered * 0.25, 0.25, servers).delay, 1e-3, 'delay');
      }
    }
  });

  it('under changing rates keeps every hour at its target', () => {
    const { rates, mu } = reference.piecewise;
    const twice = [...rates, ...rates];
    const { beds, delay } = staffForDelay(
      { hours: twice.map(() => 1), ratePerHour: twice, hazardPerHour: twice.map(() => mu), start: 12, most: 100 },
      0.2,
    );
    for (const chance of delay) expect(chance).toBeLessThanOrEqual(0.2 + 1e-9);
    expect(Math.max(...beds)).toBeLessThan(40);
    expect(() => staffForDelay({ hours: [1], ratePerHour: [1], hazardPerHour: [1], start: 0 }, 1)).toThrow(/target/);
  });
});
