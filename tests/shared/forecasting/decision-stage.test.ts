import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { decisionsPerHour, presentByStage, stagedStays } from '../../../shared/forecasting/decision-stage.ts';
import { exactNeed } from '../../../shared/forecasting/exact-need.ts';
import { fitStays } from '../../../shared/forecasting/fit-stays.ts';
import { simulateNeedPart } from '../../../shared/forecasting/simulate-need.ts';
import {
  admittedStream,
  boardingStream,
  decisionStage,
  streamsPerArea,
} from '../../../shared/forecasting/stay-model.ts';
import { hazardAt } from '../../../shared/forecasting/stay-shape.ts';
import { gammaExceedance } from '../../../shared/stochastic/gamma.ts';
import { pmfMean } from '../../../shared/stochastic/pmf.ts';
import { buildNeedPlan } from '../../support/build-need-plan.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { simulateNeedLog } from '../../support/simulate-need-log.ts';

/** Survival of two exponential phases of rates a and b in turn: the hypoexponential law (textbook). */
const twoPhases = (a: number, b: number, t: number): number => (b * Math.exp(-a * t) - a * Math.exp(-b * t)) / (b - a);

describe('who is present in a staged area', () => {
  // 2 admitted arrivals an hour for ten days: 3 h to the decision, 5 h of boarding, both exponential.
  const hours = new Float64Array(240).fill(1);
  const flat = (value: number): Float64Array => new Float64Array(240).fill(value);
  const past = {
    hours,
    ratePerHour: Array.from({ length: streamsPerArea }, (_, s) => flat(s === admittedStream ? 2 : 0)),
    hazardPerHour: Array.from({ length: streamsPerArea }, (_, s) => flat(s === boardingStream ? 1 / 5 : 1 / 3)),
  };
  const none = Array.from({ length: streamsPerArea }, () => null);

  // Source: Little's law (Little 1961).
  it('is λ·E[D] undecided and λ·E[B] boarding at rest', () => {
    const { means } = presentByStage(past, none);
    expectRelative(means[admittedStream], 6, 1e-6, 'undecided');
    expectRelative(means[boardingStream], 10, 1e-6, 'boarding');
  });

  it('decides as many an hour as arrive at rest, under a shape too', () => {
    const even = { step: 1 / 16, stays: Array.from({ length: 129 }, (_, i) => 2 * -Math.expm1(-i / 16)), tail: 0.001 };
    for (const shape of [null, even]) {
      const decided = decisionsPerHour(hours, past.ratePerHour[admittedStream], past.hazardPerHour[0], shape);
      expectRelative(decided[239], 2, 1e-3, 'decisions an hour');
    }
  });
});

describe('need with two stages', () => {
  // Source: the hypoexponential law; newcomers by M_t/G/∞, mean λ·∫ S (Eick, Massey & Whitt 1993), here in closed form.
  it('is exact for those present and for newcomers, equal hazards included', () => {
    for (const [a, b] of [
      [1 / 3, 1 / 5],
      [0.25, 0.25 + 1e-12],
      [0.2, 3],
    ]) {
      const area = (rate: number, patients: number) =>
        exactNeed({
          hours: [0.5, 1, 2.5],
          streams: [{ ratePerHour: [rate, rate, rate], hazardPerHour: [a, a, a], thenHazardPerHour: [b, b, b] }],
          present: [{ patients, shares: [1] }],
        }).map(pmfMean);
      [0.5, 1.5, 4].forEach((t, k) => {
        // At equal rates the law is Erlang's of two phases.
        const same = Math.abs(a - b) < 1e-6;
        const survival = same ? (1 + a * t) * Math.exp(-a * t) : twoPhases(a, b, t);
        expectRelative(area(0, 10)[k], 10 * survival, 1e-9, `present, ${t} h`);
        const stayed = same
          ? 2 / a - (2 / a + t) * Math.exp(-a * t)
          : ((b / a) * -Math.expm1(-a * t) - (a / b) * -Math.expm1(-b * t)) / (b - a);
        expectRelative(area(4, 0)[k], 4 * stayed, 1e-9, `newcomers, ${t} h`);
      });
    }
  });

  // Source: the exact method above, hazards that change by the hour.
  it('is simulated with the exact distribution, |F̂ − F| ≤ 4·√(F(1 − F)/R)', () => {
    const hours = 8;
    const flat = (values: number[]): number[] => Array.from({ length: hours }, (_, h) => values[h % values.length]);
    const hazards = [flat([0.4, 0.3]), flat([0.35, 0.5]), flat([0.2]), flat([0.6]), flat([0.1, 0.3, 0.05])];
    const known = {
      rates: flat([5, 9, 7]),
      hazards,
      shares: [0.5, 0.4, 0.05, 0.05] as [number, number, number, number],
      ...{ present: 20, presentShares: [0.4, 0.4, 0.1, 0.1, 0], boarding: 6, beds: 20, staged: true },
    };
    const replications = 20_000;
    const part = simulateNeedPart(buildNeedPlan([known], 41), 0, replications);
    const exact = exactNeed({
      hours: new Array<number>(hours).fill(1),
      streams: hazards.map((hazardPerHour, s) => ({
        ratePerHour: known.rates.map((rate) => rate * ([...known.shares, 0][s] ?? 0)),
        hazardPerHour,
        thenHazardPerHour: s === admittedStream ? hazards[boardingStream] : undefined,
      })),
      present: [
        { patients: 14, shares: known.presentShares },
        { patients: 6, shares: [0, 0, 0, 0, 1] },
      ],
    });
    exact.forEach((law, h) => {
      let expected = 0;
      let found = 0;
      for (let n = 0; n < Math.min(law.length, part.size); n += 1) {
        expected += law[n];
        found += part.need[h * part.size + n] / replications;
        expectWithin(found, expected, 4 * Math.sqrt((expected * (1 - expected)) / replications) + 1e-4, `${h} h, ${n}`);
      }
    });
  });

  it('leaves every other draw alone when a plan changes: no change of stays, the same digits', () => {
    const area = (present: number) => ({
      rates: [6, 8, 4, 3],
      hazards: [0.4, 0.3, 0.2, 0.6, 0.15].map((value) => [value, value, value, value]),
      shares: [0.5, 0.4, 0.05, 0.05] as [number, number, number, number],
      ...{ present, presentShares: [0.4, 0.4, 0.1, 0.1, 0], beds: 20, staged: true },
    });
    const plan = buildNeedPlan([area(10), area(8)], 43);
    const asIs = simulateNeedPart(plan, 0, 300);
    const changed = simulateNeedPart(plan, 0, 300, { demand: [0.5, 1] });
    const second = asIs.hours * asIs.size;
    expect(Array.from(changed.need.subarray(second))).toEqual(Array.from(asIs.need.subarray(second)));
    const more = simulateNeedPart(plan, 0, 300, { stay: [1, 1, 1, 1, 2, 1, 1, 1, 1, 1] });
    const mean = (part: typeof asIs): number =>
      part.need.subarray(3 * part.size, 4 * part.size).reduce((sum, count, n) => sum + count * n, 0) / 300;
    expect(mean(more)).toBeGreaterThan(mean(asIs));
  });
});

describe('fitStays on stays that are not exponential (seeds 1 to 6, 210 days)', () => {
  const zone = makeZone('Europe/London');
  const from = Date.parse('2029-01-01T00:00Z') / 1000;
  const days = 210;
  const models = Array.from({ length: 6 }, (_, i) => {
    const visits = simulateNeedLog({
      zone,
      from,
      days,
      areas: [
        {
          ratePerHour: Array.from({ length: 168 }, (__, h) => 4 * (1 + 0.6 * Math.cos((2 * Math.PI * (h - 14)) / 24))),
          shares: Array.from({ length: 6 }, () => [0.66, 0.28, 0.03, 0.03]),
          meanStay: [3.5, 7, 5, 2],
          shape: [2.5, 2.4, 2, 1.5],
          boardingShape: 1,
        },
      ],
      pace: (_, hour) => (hour < 8 ? 0.7 : 1.15),
      arrivalFactor: { variance: 0.01, correlation: 0.4 },
      outflow: [
        { variance: 0.02, correlation: 0.4 },
        { variance: 0.08, correlation: 0.6 },
      ],
      seed: i + 1,
    });
    const facts = { selectedBy: 'arrived', takenAt: from + (days + 10) * 86_400, missingDeparture: 'unknown' } as const;
    return fitStays({ visits, areas: 1, zone, window: { from, to: from + days * 86_400 }, facts });
  });

  // Source: the generator's truth. Held against exponential stays, both variances would come out near half of it.
  it('finds the outflow factor’s variance and correlation', () => {
    for (const [group, variance, correlation] of [
      ['others', 0.02, 0.4],
      ['admitted', 0.08, 0.6],
    ] as const) {
      const found = models.map((model) => model.outflow[group]);
      const near = (values: number[], expected: number, label: string): void => {
        const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
        const spread = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1);
        expectWithin(mean, expected, 3 * Math.sqrt(spread / values.length), `${label}, ${group}`);
        expectRelative(mean, expected, 0.3, `${label}, ${group}`);
      };
      near(
        found.map((factor) => factor.variance),
        variance,
        'variance',
      );
      near(
        found.map((factor) => factor.correlation),
        correlation,
        'correlation',
      );
    }
    expect(models.map((model) => model.outflowDayStartsAt)).toEqual([4, 4, 4, 4, 4, 4]);
  });

  // Source: the gamma law's survival in closed form; shape 1.4 before the decision, shape 1 after, each in its own means.
  it('finds the laws of the time to the decision and of boarding, and that one factor moves both', () => {
    for (const model of models) {
      const stage = model.toDecision?.[0] ?? null;
      expect(stage?.stream).toBe(decisionStage);
      // The generator's day factor of the admitted moves their whole stay.
      expect(model.decisionFollows).toBe('admitted');
      expect(stagedStays(model).staged).toEqual([true]);
      for (const [shape, part] of [
        [stage?.shape ?? null, 1.4],
        [model.streams[boardingStream].shape, 1],
      ] as const) {
        expect(shape).not.toBeNull();
        for (const t of [0.25, 0.5, 1, 1.5]) {
          const survival = Math.exp(-hazardAt(shape, t));
          expectWithin(survival, gammaExceedance(part * t, part), 0.05, `shape ${part}, ${t} means`);
        }
      }
    }
  });
});
