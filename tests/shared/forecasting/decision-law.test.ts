import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { presentByDecision } from '../../../shared/forecasting/decision-law.ts';
import { fitStays } from '../../../shared/forecasting/fit-stays.ts';
import { admittedStream, boardingStream, streamsPerArea } from '../../../shared/forecasting/stay-model.ts';
import type { StayShape } from '../../../shared/forecasting/stay-model.ts';
import { hazardAt } from '../../../shared/forecasting/stay-shape.ts';
import { gammaExceedance } from '../../../shared/stochastic/gamma.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { simulateNeedLog } from '../../support/simulate-need-log.ts';

const exponential = (mean: number): StayShape => ({ step: 1 / 16, stays: [0, mean / 16], tail: mean });

describe('presentByDecision', () => {
  // 2 admitted arrivals an hour for ten days, 8 h in all: 3 h to the decision, 5 h of boarding, both exponential.
  const hours = new Float64Array(240).fill(1);
  const flat = (value: number): Float64Array => new Float64Array(240).fill(value);
  const past = {
    hours,
    ratePerHour: Array.from({ length: streamsPerArea }, (_, s) => flat(s === admittedStream ? 2 : 0)),
    hazardPerHour: Array.from({ length: streamsPerArea }, (_, s) => flat(s === boardingStream ? 1 / 5 : 1 / 8)),
  };
  const shapes = Array.from({ length: streamsPerArea }, () => null);
  const { means, remaining, undecidedAdmitted } = presentByDecision(past, shapes, {
    before: exponential(3 / 8),
    boarding: exponential(5 / 8),
  });

  // Source: Little's law (Little 1961).
  it('has λ·E[D] undecided and λ·E[B] boarding at rest', () => {
    expectRelative(undecidedAdmitted ?? NaN, 6, 0.01, 'undecided');
    expectRelative(means[boardingStream], 10, 0.01, 'boarding');
  });

  // Source: the hypoexponential law of two phases of rates a and b, S(t) = (b·e^{−at} − a·e^{−bt}) / (b − a) (textbook).
  it('gives the undecided the rest of their time to the decision and then all of their boarding', () => {
    const [a, b] = [8 / 3, 8 / 5];
    for (const t of [0.05, 0.125, 0.25, 0.5, 1, 2, 3]) {
      const exact = (b * Math.exp(-a * t) - a * Math.exp(-b * t)) / (b - a);
      expectWithin(Math.exp(-hazardAt(remaining[admittedStream], t)), exact, 0.01, `remaining ${t}`);
    }
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

  // Source: the gamma law's survival in closed form; shape 1.4 and mean 7 · 1.4 / 2.4 before, shape 1 and 7 / 2.4 after.
  it('finds the laws of the time to the decision and of boarding', () => {
    // One unit is a mean stay as the engine counts it, whose hazard is g times 1/7 up to the level of g.
    for (const model of models) {
      const law = model.decisions[0];
      for (const [shape, part] of [
        [law?.before ?? null, 1.4],
        [law?.boarding ?? null, 1],
      ] as const) {
        expect(shape).not.toBeNull();
        for (const t of [0.15, 0.3, 0.6, 1]) {
          const survival = Math.exp(-hazardAt(shape, t));
          expectWithin(survival, gammaExceedance(2.4 * t, part), 0.05, `shape ${part}, ${t} means`);
        }
      }
    }
  });
});
